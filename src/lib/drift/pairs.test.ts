import { describe, expect, test } from 'vitest';
import { rawOf } from '$lib/magnetics/set-reset';
import { add, magnitude, scale, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import { driftSettings } from './params';
import {
	diagnose,
	explainedBy,
	filmOf,
	NO_PAIRS,
	splitSlope,
	surroundingsKind,
	withPair,
	type PairState
} from './pairs';
import type { Slope } from './slope';
import type { DriftReference, PairRecord } from './types';

const SETTINGS = driftSettings();
const B: Vec3 = [150, -120, 400];
const O: Vec3 = [300, 40, -210];
const KAPPA = -0.003;
const K_OFFSET: Vec3 = [0.4, -0.2, 0.1];
const REFERENCE: DriftReference = { atMs: 0, fieldMg: B, offsetMg: O, tempC: 20 };
const SLOPE: Slope = {
	perC: add(scale(B, KAPPA), K_OFFSET),
	errorPerC: [0.01, 0.01, 0.01],
	triples: 500
};
const NO_SETTING = { geomagneticMg: ZERO, fallbackTempC: 20, offsetPerC: K_OFFSET };

function pairOf(field: Vec3, offset: Vec3, more: Partial<PairRecord> = {}): PairRecord {
	return {
		atMs: 1,
		setMg: rawOf(field, 1, offset),
		resetMg: rawOf(field, -1, offset),
		before: null,
		tempC: 20,
		vacant: true,
		...more
	};
}
const state = (...pairs: PairRecord[]): PairState =>
	pairs.reduce((at, pair) => withPair(at, pair, NO_SETTING, SETTINGS), NO_PAIRS);
const explained = (at: PairState) => explainedBy(REFERENCE, at, KAPPA, SLOPE);
const far = (a: Vec3, b: Vec3) => magnitude(subtract(a, b));

describe('what pairs explain', () => {
	test('without one, nothing', () => {
		expect(explained(NO_PAIRS)).toEqual({ bridgeMg: ZERO, surroundingsMg: ZERO });
	});

	test('a moved offset is bridge, a moved field is surroundings', () => {
		const found = explained(state(pairOf(add(B, [0, 12, 0]), add(O, [-9, 0, 0]))));
		expect(far(found.bridgeMg, [-9, 0, 0])).toBeLessThan(1e-9);
		expect(far(found.surroundingsMg, [0, 12, 0])).toBeLessThan(1e-9);
	});

	test('a pair taken 15 °C warmer explains nothing where only temperature moved it', () => {
		const warm = pairOf(scale(B, 1 + 15 * KAPPA), add(O, scale(K_OFFSET, 15)), { tempC: 35 });
		const found = explained(state(warm));
		expect(magnitude(found.bridgeMg)).toBeLessThan(1e-9);
		expect(magnitude(found.surroundingsMg)).toBeLessThan(1e-9);
	});

	test('the site line at the time is not the node’s surroundings', () => {
		const setting = { ...NO_SETTING, geomagneticMg: [-15, 2, 0] as const };
		const at = withPair(NO_PAIRS, pairOf(add(B, [-15, 2, 0]), O), setting, SETTINGS);
		expect(magnitude(explained(at).surroundingsMg)).toBeLessThan(1e-9);
	});

	test('a pair in an occupied bay updates the bridge only', () => {
		const at = state(
			pairOf(B, O),
			pairOf(add(B, [200, 0, 0]), add(O, [5, 0, 0]), { vacant: false })
		);
		expect(far(explained(at).bridgeMg, [5, 0, 0])).toBeLessThan(1e-9);
		expect(magnitude(explained(at).surroundingsMg)).toBeLessThan(1e-9);
	});
});

describe('the slope of the offset', () => {
	const at = (tempC: number, kick = 0) =>
		pairOf(B, add(O, add(scale(K_OFFSET, tempC - 20), [kick, 0, 0])), { tempC });

	test('is not known until three pairs span 10 °C', () => {
		expect(state(at(20), at(29)).offsetPerC).toBeNull();
		expect(state(at(20), at(25), at(29)).offsetPerC).toBeNull();
		expect(far(state(at(20), at(25), at(30)).offsetPerC!, K_OFFSET)).toBeLessThan(1e-9);
	});

	test('a jump of the offset begins a new series and keeps the slope so far', () => {
		const jumped = state(at(20), at(25), at(30), at(31, 30));
		expect(jumped.kept).toHaveLength(1);
		expect(far(jumped.offsetPerC!, K_OFFSET)).toBeLessThan(1e-9);
	});

	test('until it is known it is k - κ b', () => {
		const split = splitSlope(REFERENCE, KAPPA, SLOPE, null);
		expect(far(split.offset, K_OFFSET)).toBeLessThan(1e-12);
	});

	test('offset and field slopes always make k together, and k_O is held near it', () => {
		for (const wild of [K_OFFSET, [3, -3, 2] as const]) {
			const { offset, field } = splitSlope(REFERENCE, KAPPA, SLOPE, wild);
			expect(far(add(offset, field), SLOPE.perC)).toBeLessThan(1e-12);
			expect(far(offset, K_OFFSET)).toBeLessThan(0.5);
		}
	});
});

describe('kinds of surroundings', () => {
	test.each<[string, Vec3, string]>([
		['8 % weaker in the same direction', scale(B, 0.92), 'gain_or_field'],
		['2.5 % weaker', scale(B, 0.975), 'gain_or_field'],
		['stronger in the same direction', scale(B, 1.08), 'steel_or_works'],
		['turned by 3°', turned(3), 'tilt'],
		['turned by 1.5°', turned(1.5), 'tilt'],
		['weaker and turned by 3°', scale(turned(3), 0.9), 'steel_or_works'],
		['something added', add(B, [20, 20, 20]), 'steel_or_works']
	])('%s: %s', (_title, to, kind) => {
		expect(surroundingsKind(B, to, SETTINGS)).toBe(kind);
	});
});

/** B turned about the vertical axis. */
function turned(deg: number): Vec3 {
	const a = (deg * Math.PI) / 180;
	// About an axis level and square to B, so that the whole vector turns.
	const flat = Math.hypot(B[0], B[1]);
	const [h, z] = [flat * Math.cos(a) - B[2] * Math.sin(a), flat * Math.sin(a) + B[2] * Math.cos(a)];
	return [(B[0] / flat) * h, (B[1] / flat) * h, z];
}

describe('a diagnosis', () => {
	const lost = scale(B, 0.8);
	const heals = pairOf(B, O, { before: { polarity: 1, rawMg: rawOf(lost, 1, O) } });

	test('film is what was read before less what the pulse left', () => {
		expect(far(filmOf(heals)!, scale(B, -0.2))).toBeLessThan(1e-9);
	});

	test('a flipped film had lost twice its field', () => {
		const flipped = pairOf(B, O, { before: { polarity: 1, rawMg: rawOf(B, -1, O) } });
		expect(far(filmOf(flipped)!, scale(B, -2))).toBeLessThan(1e-9);
	});

	test('without the reading before the pulse film is not known, never 0', () => {
		expect(filmOf(pairOf(B, O))).toBeNull();
	});

	test.each<[string, PairRecord, string, number]>([
		['film', heals, 'film', 0.2 * magnitude(B)],
		['offset', pairOf(B, add(O, [0, 25, 0])), 'bridge', 25],
		['steel', pairOf(add(B, [30, 0, 0]), O), 'steel_or_works', 30],
		['gain', pairOf(scale(B, 0.9), O), 'gain_or_field', 0.1 * magnitude(B)]
	])('%s is named with its size', (_title, pair, cause, sizeMg) => {
		const before = explained(state(pairOf(B, O)));
		const after = explained(state(pairOf(B, O), pair));
		const { named } = diagnose(pair, REFERENCE, before, after, SETTINGS);
		expect(named.cause).toBe(cause);
		expect(named.magnitudeMg).toBeCloseTo(sizeMg, 6);
	});

	test('in an occupied bay surroundings are not judged', () => {
		const pair = pairOf(add(B, [90, 0, 0]), add(O, [12, 0, 0]), { vacant: false });
		const before = explained(state(pairOf(B, O)));
		const found = diagnose(pair, REFERENCE, before, explained(state(pairOf(B, O), pair)), SETTINGS);
		expect(found.surroundingsChangeMg).toBeNull();
		expect(found.named.cause).toBe('bridge');
	});
});
