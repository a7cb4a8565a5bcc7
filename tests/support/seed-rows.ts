import { advance, encodeFast, encodeSlow, newGroup, view } from '$lib/detection/group';
import type { GroupMember, NodeView, RowItem } from '$lib/detection/types';
import { countsToMg } from '$lib/magnetics/counts';
import { BUILT_IN_PROFILES } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';

const PROFILE = BUILT_IN_PROFILES[0]!;
const MIN = 60_000;
/** About 180, -25 and 440 mG: a quiet field of 476 mG. */
const QUIET: Vec3 = [2_949, -410, 7_209];
/** 212 mG more along z while a vehicle stands there. */
const VEHICLE_COUNTS = 3_473;

export interface SeedRow {
	atMs: number;
	seq: number;
	counts: Vec3;
	tempC: number;
}

export interface SeedStory {
	rows: SeedRow[];
	fast: Buffer;
	slow: Buffer;
	view: NodeView;
}

const member = (nodeId: number): GroupMember => ({
	nodeId,
	...{ eastM: null, northM: null, row: null },
	profile: {
		rangeMg: PROFILE.rangeMg,
		sensitivityTempcoPerC: PROFILE.sensitivityTempcoPerC,
		filmSafeMg: PROFILE.filmSafeMg
	},
	periodS: 60,
	graceS: 900,
	params: {}
});

/** When a node speaks: learning at 2 s, then at 60 s, a burst at `sinceMs`, then at 10 min at the most, inside the grace time. */
function times(sinceMs: number, endMs: number): number[] {
	const learning = Array.from({ length: 75 }, (_, i) => sinceMs - 15 * MIN + i * 2_000);
	const waiting = Array.from({ length: 10 }, (_, i) => sinceMs - (11 - i) * MIN);
	const burst = Array.from({ length: 24 }, (_, i) => sinceMs + i * 500);
	const stepMs = Math.min(10 * MIN, Math.max(MIN, Math.ceil((endMs - sinceMs) / 120)));
	const after: number[] = [];
	for (let atMs = endMs; atMs > sinceMs + 15_000; atMs -= stepMs) after.unshift(atMs);
	return [...learning, ...waiting, ...burst, ...after];
}

/** Rows of one node that stood free and, when `taken`, got a vehicle at `sinceMs`; and what detection makes of them. */
export function seedStory(
	nodeId: number,
	taken: boolean,
	sinceMs: number,
	endMs: number
): SeedStory {
	const group = newGroup([member(nodeId)]);
	const placed = { kind: 'place', preCommissioned: true } as const;
	advance(group, { kind: 'act', actId: 0, nodeId, atMs: sinceMs - 20 * MIN, act: placed });
	const rows = times(sinceMs, endMs).map((atMs, seq): SeedRow => {
		const [x, y, z] = QUIET;
		const shift = taken && atMs >= sinceMs ? VEHICLE_COUNTS : 0;
		const noise = (k: number) => ((seq * k) % 11) - 5;
		return {
			...{ atMs, seq },
			counts: [x + noise(7), y + noise(5), z + shift + noise(3)],
			tempC: 15
		};
	});
	for (const row of rows) advance(group, item(nodeId, row));
	return {
		rows,
		fast: Buffer.from(encodeFast(group, nodeId)),
		slow: Buffer.from(encodeSlow(group, nodeId)),
		view: view(group, nodeId)
	};
}

const item = (nodeId: number, row: SeedRow): RowItem => ({
	kind: 'row',
	nodeId,
	...{ atMs: row.atMs, boot: 1, seq: row.seq, row: 0 },
	rawMg: countsToMg(row.counts, PROFILE),
	polarity: 1,
	tempC: row.tempC,
	clipped: false
});
