import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import {
	MEMORY_BYTES,
	noteBits,
	notesOf,
	packMemory,
	unpackMemory,
	type DriftMemory
} from './codec';
import { closeHour, startDrift } from './node-drift';
import { driftSettings } from './params';
import { WATCH_START } from './watch';

const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;
const T0 = Date.UTC(2026, 0, 5);
const V: Vec3 = [123.456, -234.567, 345.678];
const PAIR = { atMs: T0, fieldMg: V, offsetMg: V, tempC: 12.34, geomagneticMg: V };
const times = <T>(n: number, make: (i: number) => T): T[] =>
	Array.from({ length: n }, (_, i) => make(i));
const reference = { atMs: T0, fieldMg: V, offsetMg: V, tempC: 20.5, lineMg: V };

/** Every list as long as the method lets it grow, every field present. */
function fullest(): DriftMemory {
	const batch = (atMs: number) => ({ atMs, perC: V, weight: 12.5, triples: 253 });
	const day = (i: number) => ({
		...{ dayMs: T0 - i * DAY_MS, unexplainedMg: V, movementMg: V },
		...{ hours: 24, segment: 3, run: 1 }
	});
	const slope = { perC: [1.5, -0.25, 0.5] as Vec3, errorPerC: V, triples: 4000 };
	return {
		referenceId: 7,
		film: { lastPulseAtMs: T0 + 1, lastClippedAtMs: T0 + 2, lastOverFilmAtMs: null },
		drift: {
			...startDrift(reference, -0.003),
			slope,
			slopeState: {
				recent: times(24, (i) => ({
					...{ hourMs: T0 + i * HOUR_MS, levelMg: V, tempC: 20 },
					stay: String(T0 / 1000)
				})),
				hours: times(24, (i) => batch(T0 + i * HOUR_MS)),
				days: times(60, (i) => batch(T0 - (59 - i) * DAY_MS))
			},
			pairs: { vacant: PAIR, any: PAIR, kept: times(30, () => PAIR), offsetPerC: V },
			watch: {
				...WATCH_START,
				...{ beganMs: T0, driftingSinceMs: T0, driftingBy: 'cusum', refreshBeganMs: T0 },
				...{ segment: 4, run: 1, centre: { zeroMg: V, sigmaMg: V } },
				today: { dayMs: T0, unexplained: times(24, () => V), movement: times(24, () => V) },
				days: times(60, (i) => day(59 - i))
			},
			stay: { stay: String(T0 / 1000), levelMg: V, tempC: 20, lineMg: V },
			last: {
				...{ hourMs: T0, tempC: 21.5, totalMg: V, temperatureMg: V, geomagneticMg: V },
				...{ bridgeMg: V, filmMg: V, surroundingsMg: V, unexplainedMg: V },
				...{ errorMg: V, notes: ['no_pair'] }
			}
		}
	};
}

describe('a packed drift memory', () => {
	test('stays under 4 kB with every list at its limit', () => {
		expect(packMemory(fullest()).length).toBeLessThanOrEqual(MEMORY_BYTES);
	});

	test('is the same bytes again once unpacked', () => {
		const bytes = packMemory(fullest());
		expect(packMemory(unpackMemory(bytes))).toEqual(bytes);
	});

	test('keeps fields to 0.001 mG and times to the hour or second', () => {
		const { drift, film } = unpackMemory(packMemory(fullest()));
		expect(drift.reference).toEqual(reference);
		expect(drift.pairs.any?.offsetMg).toEqual(V);
		expect(drift.slopeState.recent[5]?.hourMs).toBe(T0 + 5 * HOUR_MS);
		expect(drift.slopeState.days[0]?.atMs).toBe(T0 - 59 * DAY_MS);
		expect(drift.watch.days[59]).toMatchObject({ dayMs: T0, segment: 3, run: 1 });
		expect(drift.watch.driftingBy).toBe('cusum');
		expect(film).toEqual(fullest().film);
	});

	test('grows no further once its windows are full', () => {
		const settings = driftSettings();
		let drift = startDrift(reference, -0.003);
		let most = 0;
		for (let h = 0; h < 24 * 130; h++) {
			const tempC = 15 + 6 * Math.sin(h / 4) + 10 * Math.sin(h / 1400);
			const hour = {
				...{ hourMs: T0 + h * HOUR_MS, fieldMg: V, offsetMg: V, tempC },
				...{ n: 60, stay: h % 24 < 6 ? String(T0 / 1000) : null }
			};
			const line = { verdict: 'few_nodes', changeMg: [0, 0, 0], spreadMg: null, nodes: 1 } as const;
			const closed = closeHour(drift, hour, line, settings).drift;
			if (h % 97 !== 0) {
				drift = closed;
				continue;
			}
			const film = { lastPulseAtMs: null, lastClippedAtMs: null, lastOverFilmAtMs: null };
			const bytes = packMemory({ referenceId: 1, drift: closed, film });
			most = Math.max(most, bytes.length);
			({ drift } = unpackMemory(bytes));
		}
		expect(most).toBeLessThanOrEqual(MEMORY_BYTES);
	});

	test('of another layout is refused', () => {
		expect(() => unpackMemory(new Uint8Array([99]))).toThrow(RangeError);
	});
});

test('notes survive as bits', () => {
	const notes = ['slope_not_known', 'site_change_cause_not_known'] as const;
	expect(notesOf(noteBits(notes))).toEqual(notes);
});
