import { describe, expect, test } from 'vitest';
import { rawOf } from '$lib/magnetics/set-reset';
import { add, magnitude, scale, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import { applyPair, closeHour, startDrift, voteOf, type NodeDrift } from './node-drift';
import { pairDue } from './pair-rule';
import { driftSettings } from './params';
import { closeSiteHour } from './site-hour';
import type { SiteLine } from './site-line';
import type { DriftReference, HourParts, HourRecord, PairRecord } from './types';

const SETTINGS = driftSettings();
const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const KAPPA = -0.003;
const B: Vec3 = [150, -120, 400];
const O: Vec3 = [300, 40, -210];
const K_OFFSET: Vec3 = [0.4, -0.2, 0.1];
const REFERENCE: DriftReference = { atMs: 0, fieldMg: B, offsetMg: O, tempC: 20 };
const ALONE: SiteLine = { verdict: 'few_nodes', changeMg: ZERO, spreadMg: null, nodes: 1 };

const tempAt = (h: number) => 20 + 8 * Math.sin((2 * Math.PI * h) / 24);
/** A node whose level moves with temperature, and by what is given. */
function hourAt(h: number, moved: Vec3 = ZERO, more: Partial<HourRecord> = {}): HourRecord {
	const warmer = tempAt(h) - 20;
	const fieldMg = add(add(scale(B, 1 + KAPPA * warmer), scale(K_OFFSET, warmer)), moved);
	return {
		hourMs: h * HOUR_MS,
		fieldMg,
		offsetMg: O,
		tempC: tempAt(h),
		n: 60,
		stay: null,
		...more
	};
}
function run(
	from: NodeDrift,
	hours: readonly HourRecord[]
): { drift: NodeDrift; parts: HourParts[] } {
	const all: HourParts[] = [];
	let drift = from;
	for (const hour of hours) {
		const closed = closeHour(drift, hour, ALONE, SETTINGS);
		drift = closed.drift;
		if (closed.parts !== null) all.push(closed.parts);
	}
	return { drift, parts: all };
}
const hours = (from: number, n: number, moved: (h: number) => Vec3 = () => ZERO) =>
	Array.from({ length: n }, (_, i) => hourAt(from + i, moved(from + i)));
function pairAt(h: number, field: Vec3, offset: Vec3, before: Vec3 | null = null): PairRecord {
	const warmer = tempAt(h) - 20;
	const at = scale(field, 1 + KAPPA * warmer);
	const off = add(offset, scale(K_OFFSET, warmer));
	return {
		atMs: h * HOUR_MS,
		setMg: rawOf(at, 1, off),
		resetMg: rawOf(at, -1, off),
		before: before === null ? null : { polarity: 1, rawMg: rawOf(before, 1, off) },
		tempC: tempAt(h),
		vacant: true
	};
}
const settled = run(startDrift(REFERENCE, KAPPA), hours(1, 72)).drift;

describe('an hour by cause', () => {
	test('the parts always make the whole', () => {
		const { parts } = run(
			settled,
			hours(73, 30, (h) => [h / 10, 0, -h / 20])
		);
		for (const hour of parts) {
			const sum = [
				hour.temperatureMg,
				hour.geomagneticMg,
				hour.bridgeMg,
				hour.filmMg,
				hour.surroundingsMg,
				hour.unexplainedMg
			].reduce(add);
			expect(magnitude(subtract(sum, hour.totalMg))).toBeLessThan(1e-9);
		}
	});

	test('temperature alone leaves nothing unexplained', () => {
		const { parts } = run(settled, hours(73, 24));
		expect(Math.max(...parts.map((p) => magnitude(p.temperatureMg)))).toBeGreaterThan(5);
		for (const { unexplainedMg } of parts) expect(magnitude(unexplainedMg)).toBeLessThan(0.1);
	});

	test('before the slope is known the hour says so and is not judged', () => {
		const { parts } = run(startDrift(REFERENCE, KAPPA), hours(1, 1));
		expect(parts[0]).toMatchObject({ errorMg: null, temperatureMg: ZERO });
		expect(parts[0]!.notes).toContain('slope_not_known');
	});

	test('an hour without a temperature says so and is not judged', () => {
		const { parts } = run(settled, [hourAt(73, ZERO, { tempC: null })]);
		expect(parts[0]).toMatchObject({ errorMg: null, notes: ['no_temperature', 'few_nodes'] });
	});

	test('an occupied hour gives no parts', () => {
		expect(run(settled, [hourAt(73, [120, 0, 0], { stay: 'a' })]).parts).toEqual([]);
	});

	test('a better offset in use never looks like drift: b + O stays', () => {
		const better = hourAt(73);
		const shift: Vec3 = [14, 0, 0];
		const { parts } = run(settled, [
			{ ...better, fieldMg: subtract(better.fieldMg, shift), offsetMg: add(O, shift) }
		]);
		expect(magnitude(parts[0]!.unexplainedMg)).toBeLessThan(0.1);
	});

	test('without a pair there is no direction: no vote, no geomagnetic part', () => {
		const bare = run(startDrift({ ...REFERENCE, offsetMg: null }, KAPPA), hours(1, 48));
		expect(bare.parts.at(-1)!.notes).toContain('no_pair');
		expect(voteOf(bare.drift, hourAt(49))).toBeNull();
	});
});

describe('a pair', () => {
	test('explains a step that stood unexplained', () => {
		const moved = run(
			settled,
			hours(73, 6, () => [0, 18, 0])
		).drift;
		expect(moved.watch.driftingSinceMs).not.toBeNull();
		const { drift, diagnosis } = applyPair(moved, pairAt(79, add(B, [0, 18, 0]), O), SETTINGS);
		expect(diagnosis!.named.cause).toBe('steel_or_works');
		const { parts } = run(
			drift,
			hours(80, 3, () => [0, 18, 0])
		);
		expect(magnitude(parts[0]!.unexplainedMg)).toBeLessThan(1);
		expect(magnitude(parts[0]!.surroundingsMg)).toBeGreaterThan(17);
	});

	test('names a film loss that it healed, and breaks the slope across it', () => {
		const lost = scale(B, -0.1);
		const weak = run(
			settled,
			hours(73, 6, () => lost)
		).drift;
		const warm = 1 + KAPPA * (tempAt(79) - 20);
		const pair = pairAt(79, B, O, scale(add(B, lost), warm));
		const { drift, diagnosis } = applyPair(weak, pair, SETTINGS);
		expect(diagnosis!.named.cause).toBe('film');
		expect(diagnosis!.named.magnitudeMg).toBeCloseTo(0.1 * magnitude(B) * warm, 6);
		expect(drift.slopeState.recent).toEqual([]);
		expect(drift.watch.run).toBe(1);
	});

	test('gives a reference its offset where it had none, and leaves the level', () => {
		const level = add(B, O);
		const bare = startDrift({ atMs: 0, fieldMg: level, offsetMg: null, tempC: 20 }, KAPPA);
		const { drift, diagnosis } = applyPair(bare, pairAt(0, B, O), SETTINGS);
		expect(diagnosis).toBeNull();
		expect(magnitude(subtract(drift.reference.fieldMg, B))).toBeLessThan(1e-9);
		expect(drift.frame).not.toBeNull();
	});

	test('while the whole site moves for no known cause it tells nothing of the surroundings', () => {
		const lost: SiteLine = { ...ALONE, verdict: 'cause_not_known' };
		const { drift } = closeHour(settled, hourAt(73, [30, 0, 0]), lost, SETTINGS);
		const taken = applyPair(drift, pairAt(74, add(B, [30, 0, 0]), O), SETTINGS);
		expect(taken.diagnosis!.surroundingsChangeMg).toBeNull();
	});
});

describe('pairs by rule', () => {
	const weekOn = { nowMs: 80 * HOUR_MS + 7 * DAY_MS, lastPairAtMs: 80 * HOUR_MS, quiet: true };
	const drifting = run(
		settled,
		hours(73, 6, () => [0, 18, 0])
	).drift;

	test('weekly while all is well', () => {
		expect(pairDue('calibrate', settled, weekOn, SETTINGS)).toBe('calibrate');
		const early = { ...weekOn, nowMs: weekOn.nowMs - HOUR_MS };
		expect(pairDue('calibrate', settled, early, SETTINGS)).toBeNull();
	});

	test('on drift only where the site diagnoses, and at most once in 6 h', () => {
		expect(pairDue('calibrate', drifting, weekOn, SETTINGS)).toBeNull();
		expect(pairDue('diagnose', drifting, weekOn, SETTINGS)).toBe('diagnose');
		const soon = { ...weekOn, nowMs: 85 * HOUR_MS };
		expect(pairDue('diagnose', drifting, soon, SETTINGS)).toBeNull();
	});

	test('never, or with a vehicle there, none', () => {
		expect(pairDue('never', drifting, weekOn, SETTINGS)).toBeNull();
		expect(pairDue('diagnose', drifting, { ...weekOn, quiet: false }, SETTINGS)).toBeNull();
	});
});

describe('a site', () => {
	const turn = (heading: number, [x, y, z]: Vec3): Vec3 => [
		x * Math.cos(heading) + y * Math.sin(heading),
		-x * Math.sin(heading) + y * Math.cos(heading),
		z
	];
	const storm = (h: number): Vec3 => (h >= 73 ? [-16, 3, 1] : ZERO);
	const north: Vec3 = [200, 0, 400];

	/** Six nodes of any heading under one sky; node 5 has its own steel, the last is occupied in the storm. */
	function site() {
		let nodes = Array.from({ length: 6 }, (_, i) => ({
			nodeId: i,
			field: turn(i, north),
			drift: startDrift({ ...REFERENCE, fieldMg: turn(i, north) }, KAPPA)
		}));
		const seen: { h: number; nodeId: number; parts: HourParts | null }[] = [];
		for (let h = 1; h < 80; h++) {
			const input = nodes.map(({ nodeId, field, drift }) => {
				const steel: Vec3 = nodeId === 4 && h >= 70 ? [40, 0, 0] : ZERO;
				const vehicle: Vec3 = nodeId === 5 && h >= 72 ? [150, 0, 0] : ZERO;
				const warm = tempAt(h) - 20;
				const fieldMg = [
					scale(field, 1 + KAPPA * warm),
					scale(K_OFFSET, warm),
					turn(nodeId, storm(h)),
					steel,
					vehicle
				].reduce(add);
				const stay = magnitude(vehicle) > 0 ? 'stay' : null;
				return { nodeId, drift, hour: { ...hourAt(h), fieldMg, stay } };
			});
			const { closed } = closeSiteHour(input, SETTINGS);
			nodes = closed.map(({ nodeId, drift }, i) => ({ nodeId, drift, field: nodes[i]!.field }));
			seen.push(...closed.map(({ nodeId, parts }) => ({ h, nodeId, parts })));
		}
		return { nodes, seen };
	}
	const { nodes, seen } = site();

	test('a storm is geomagnetic at every node, whichever way it lies', () => {
		for (const { h, nodeId, parts } of seen) {
			if (h < 73 || nodeId > 3) continue;
			expect(magnitude(subtract(parts!.geomagneticMg, turn(nodeId, storm(h))))).toBeLessThan(0.5);
			expect(magnitude(parts!.unexplainedMg)).toBeLessThan(0.6);
		}
	});

	test('steel at one node stays that node’s own', () => {
		expect(nodes[4]!.drift.watch.driftingSinceMs).toBe(70 * HOUR_MS);
		expect(nodes[0]!.drift.watch.driftingSinceMs).toBeNull();
	});

	test('an occupied node votes by what changed since its stay began', () => {
		const hour = { ...hourAt(80), stay: 'stay' };
		expect(nodes[5]!.drift.stay!.stay).toBe('stay');
		expect(voteOf(nodes[5]!.drift, hour)).not.toBeNull();
		expect(voteOf(nodes[5]!.drift, { ...hour, stay: 'another' })).toBeNull();
	});

	test('rebuilt from the same hours it is the same', () => {
		expect(site().nodes).toEqual(nodes);
	});
});

test('a new reference keeps the slopes of the same sensor and forgets the rest', () => {
	const again = startDrift({ ...REFERENCE, atMs: 100 * HOUR_MS }, KAPPA, settled);
	expect(again.slope).toEqual(settled.slope);
	expect(again.watch.days).toEqual([]);
	expect(again.last).toBeNull();
});
