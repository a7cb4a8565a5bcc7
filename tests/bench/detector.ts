import { advance, newGroup, type Group } from '$lib/detection/group';
import type { GroupItem, GroupMember, RowItem } from '$lib/detection/types';

/**
 * Readings through advance() in a second of one core's time, on quiet rows of 100 nodes in service: one JSON line.
 * The core's own time is counted (user and system, garbage collection with it), so that a busy machine does not
 * blur the figure; `readingsPerWallS` is what the clock on the wall saw. Rows are made before the clock starts, as
 * replay has them from the database.
 */
const NODES = 100;
const BEATS = 4000;
const ROUNDS = 3;
const START_MS = Date.UTC(2026, 2, 2);

const member = (nodeId: number): GroupMember => ({
	nodeId,
	eastM: 2.5 * nodeId,
	northM: 0,
	row: `R${Math.floor(nodeId / 10).toString()}`,
	profile: { rangeMg: 8000, sensitivityTempcoPerC: -0.003, filmSafeMg: 4000 },
	periodS: 60,
	graceS: 900,
	params: {}
});

/** Uniform in ±1 from a counter. */
function jitter(seed: number): number {
	const x = Math.imul(seed ^ (seed >>> 15), 0x2c1b3c6d);
	return (((x ^ (x >>> 12)) >>> 0) / 0x80000000 - 1) * 0.8;
}

function row(nodeId: number, atMs: number, k: number): RowItem {
	return {
		kind: 'row',
		nodeId,
		atMs,
		boot: 1,
		seq: k,
		row: 0,
		rawMg: [
			200 + jitter(k * 31 + nodeId),
			-100 + jitter(k * 37 + nodeId),
			400 + jitter(k * 41 + nodeId)
		],
		polarity: 1,
		tempC: 15 + 5 * Math.sin((atMs - START_MS) / 14_000_000),
		clipped: false
	};
}

function commissioned(): Group[] {
	return Array.from({ length: NODES / 10 }, (_, g) => {
		const ids = Array.from({ length: 10 }, (_, i) => g * 10 + i);
		const group = newGroup(ids.map(member));
		for (const id of ids) {
			advance(group, {
				kind: 'act',
				actId: 1,
				nodeId: id,
				atMs: START_MS,
				act: { kind: 'place', preCommissioned: true }
			});
			for (let k = 1; k < 80; k++) advance(group, row(id, START_MS + k * 2000, k));
		}
		return group;
	});
}

const groups = commissioned();
let readings = 0;
let outcomes = 0;
let bestPerS = 0;
let bestPerWallS = 0;
for (let round = 0; round < ROUNDS; round++) {
	const items: GroupItem[] = [];
	for (let b = 0; b < BEATS; b++) {
		const k = round * BEATS + b;
		for (let id = 0; id < NODES; id++) items.push(row(id, START_MS + 240_000 + k * 60_000 + id, k));
	}
	const from = performance.now();
	const cpuFrom = process.cpuUsage();
	for (const item of items) outcomes += advance(groups[Math.floor(item.nodeId / 10)]!, item).length;
	const cpu = process.cpuUsage(cpuFrom);
	bestPerS = Math.max(bestPerS, (1e6 * items.length) / (cpu.user + cpu.system));
	bestPerWallS = Math.max(bestPerWallS, (1000 * items.length) / (performance.now() - from));
	readings += items.length;
}
const heapMb = Math.round(process.memoryUsage().heapUsed / 1_048_576);
console.log(
	JSON.stringify({
		bench: 'detector',
		readingsPerS: Math.round(bestPerS),
		readingsPerWallS: Math.round(bestPerWallS),
		readings,
		nodes: NODES,
		outcomes,
		heapMb
	})
);
