import fc from 'fast-check';
import { expect, test } from 'vitest';
import {
	decodeFastState,
	decodeSlowState,
	encodeFastState,
	encodeSlowState,
	LAYOUT
} from './codec';
import {
	floats,
	Fast,
	newSlow,
	type Before,
	type Echo,
	type HourSample,
	type Slow,
	type Step,
	type Triple
} from './state';

/** What the columns of node_fast and node_slow take (store/schema/node.ts). */
const FAST_BYTES = 300;
const SLOW_BYTES = 4096;

const instant = fc.integer({ min: 0, max: 4_102_444_800_000 });
const float = fc.float({ noNaN: true, noDefaultInfinity: true });
const double = fc.double({ noNaN: true, noDefaultInfinity: true });
const triple = fc.tuple(double, double, double) as fc.Arbitrary<Triple>;

test('fast state comes back bit for bit and takes at most 300 bytes', () => {
	const floats = fc.array(float, { minLength: 24, maxLength: 24 });
	fc.assert(
		fc.property(
			floats,
			fc.array(instant, { minLength: 12, maxLength: 12 }),
			float,
			(numbers, at, mg) => {
				const fast = new Fast();
				fast.buffer.set(numbers);
				[fast.lastAtMs, fast.boxFromMs, fast.openOldAtMs, fast.openNewAtMs] = at as [
					number,
					number,
					number,
					number
				];
				[fast.crossAtMs, fast.quietUntilMs, fast.nextHourMs, fast.decidedAtMs] = at.slice(4) as [
					number,
					number,
					number,
					number
				];
				fast.stayMg = fast.passMg = Math.fround(mg);
				fast.polarity = -1;
				fast.boxN = 1_000_000;
				const bytes = encodeFastState(fast);
				expect(bytes.length).toBeLessThanOrEqual(FAST_BYTES);
				expect(decodeFastState(bytes)).toStrictEqual(fast);
			}
		)
	);
});

test('every field of the fast state is stored', () => {
	for (const name of Object.keys(new Fast()) as (keyof Fast)[]) {
		const fast = new Fast();
		if (typeof fast[name] !== 'number') continue;
		(fast as unknown as Record<string, number>)[name] = 1;
		expect(decodeFastState(encodeFastState(fast))[name], name).toBe(1);
	}
});

test('temperatures not known stay not known', () => {
	expect(decodeFastState(encodeFastState(new Fast())).tempC).toBeNaN();
});

/** An arrival's words at their longest (evidence.ts): no two changes say the same. */
const wordsOf = (k: number): string[] => [
	`disturbance ${1234 + k} mG, threshold 123 mG`,
	`rose ${1234 + k} mG during a gap of 1234 s`,
	'stayed when the queue had moved on',
	`neighbour {node:12345} moved ${1234 + k} mG at the same time`,
	`neighbour {node:12346} moved ${234 + k} mG at the same time`,
	'neighbour {node:12347} moving',
	'neighbour {node:12348} quiet'
];
const before: Before = {
	state: 'occupied',
	sinceMs: 1_795_593_001_923,
	confidence: 0.123456789,
	arrival: { step: [0.1, 0.2, 0.3], first: [1.1, 2.2, 3.3], atMs: 1_795_593_001_923 },
	// Floats of four bytes, as in the fast state.
	baseline: [0.1, 0.2, 0.3].map(Math.fround) as Triple,
	evidence: {
		because: wordsOf(1),
		against: ['the reference is not yet proved']
	}
};
const step: Step = {
	j: [0.1, 0.2, 0.3],
	fromMs: 1_795_593_001_923,
	toMs: 1_795_593_001_923,
	newMs: 1_795_593_001_923,
	burst: true,
	atMs: 1_795_593_001_923,
	uncertaintyS: 31,
	settledMs: 1_795_593_001_923,
	gapS: 4711,
	riseS: 17,
	peakMg: Math.fround(123.456),
	clipped: true,
	became: 'pending',
	before
};
const echo: Echo = {
	by: 12_345,
	j: floats([0.1, 0.2, 0.3]),
	byJ: floats([0.1, 0.2, 0.3]),
	atMs: 1_795_593_001_923,
	uncertaintyS: 31,
	settledMs: 1_795_593_001_923,
	checkAfterMs: 1_795_593_001_923
};

/** Everything that can be held at once, each list at its limit (4 steps, 4 echoes, 8 moves, 26 hours). */
function fullest(): Slow {
	return {
		...newSlow(),
		state: 'occupied',
		sinceMs: 1_795_593_001_923,
		confidence: 0.123456789,
		lastKnown: { state: 'vacant', atMs: 1_795_593_001_923 },
		doubt: {
			reason: 'the field jumped at a pulse without before and after',
			sinceMs: 1_795_593_001_923
		},
		evidence: { because: wordsOf(2), against: [] },
		offset: [0.1, 0.2, 0.3],
		candidate: {
			learnedAtMs: 1_795_593_001_923,
			fieldMg: [0.1, 0.2, 0.3],
			sigmaMg: 0.7,
			tempC: 12.3,
			offsetMg: [0.1, 0.2, 0.3],
			readings: 64
		},
		reference: {
			learnedAtMs: 1_795_593_001_923,
			fieldMg: [0.1, 0.2, 0.3],
			sigmaMg: 0.7,
			tempC: 12.3,
			offsetMg: [0.1, 0.2, 0.3],
			readings: 64,
			acceptedAtMs: 1_795_593_001_923,
			provisional: true
		},
		strange: {
			visits: 2,
			out: [0.1, 0.2, 0.3],
			first: floats([0.1, 0.2, 0.3]),
			differ: true,
			moves: Array.from({ length: 8 }, () => ({
				to: 'empty' as const,
				atMs: 1_795_593_001_923,
				uncertaintyS: 31
			})),
			entries: Array.from({ length: 12 }, () => ({
				type: 'departure' as const,
				atMs: 1_795_593_001_923
			}))
		},
		arrival: before.arrival,
		// Held in float32; a suspect is dropped when it is set (afterthought.ts).
		parted: {
			atMs: 1_795_593_001_923,
			j: floats([0.1, 0.2, 0.3]),
			arrival: {
				step: floats([0.1, 0.2, 0.3]),
				first: floats([0.1, 0.2, 0.3]),
				atMs: 1_795_593_001_923
			},
			back: floats([0.1, 0.2, 0.3]),
			entries: 12_345
		},
		// Only the newest step keeps what was before it (neighbours.ts, keepInLedger).
		steps: [{ ...step, before: null }, { ...step, before: null }, { ...step, before: null }, step],
		pending: { ...step, before: null },
		echoes: [echo, echo, echo, echo],
		aisle: {
			step: { ...step, before: null },
			by: 12_345,
			byJ: [0.1, 0.2, 0.3],
			deadlineMs: 1_795_593_001_923
		},
		refreshWhy: 'a strong field met the film',
		slope: { k: [0.1, 0.2, 0.3], se: [0.1, 0.2, 0.3], triples: 2600 },
		settle: {
			actId: 123_456,
			atMs: 1_795_593_001_923,
			as: 'seen_occupied',
			before: { ...before, evidence: { because: wordsOf(3), against: [] } },
			doubt: { reason: 'magnet', sinceMs: 1_795_593_001_923 },
			entries: 12_345
		},
		// Halved when they come to 2000 (stays.ts).
		stays: Array<number>(36).fill(55),
		hours: Array.from(
			{ length: 26 },
			(): HourSample => [1_795_593_001_923, 12.3, 1.1, 2.2, 3.3, 400].map(Math.fround) as HourSample
		)
	};
}

test('slow state takes at most 4096 bytes with every list at its limit at once', () => {
	expect(encodeSlowState(fullest()).length).toBeLessThanOrEqual(SLOW_BYTES);
});

test('slow state takes at most 4096 bytes while learning with the window full', () => {
	const learning: Slow = {
		...newSlow(),
		learning: true,
		window: Array<number>(3 * 64).fill(Math.fround(123.456)),
		windowAtMs: Array<number>(64).fill(1_795_593_001_923),
		stays: Array<number>(36).fill(55)
	};
	expect(encodeSlowState(learning).length).toBeLessThanOrEqual(SLOW_BYTES);
});

test('slow state comes back as it was', () => {
	fc.assert(
		fc.property(triple, instant, double, fc.string({ maxLength: 90 }), (j, atMs, share, words) => {
			const full = fullest();
			const slow: Slow = {
				...full,
				offset: j,
				sinceMs: atMs,
				confidence: share,
				evidence: { because: [words], against: [] },
				pending: { ...step, j, atMs },
				hours: full.hours.map((h) => [atMs, ...h.slice(1)] as HourSample)
			};
			expect(decodeSlowState(encodeSlowState(slow))).toStrictEqual(slow);
		})
	);
});

test('the first byte is the layout, and a foreign one is told', () => {
	expect(encodeFastState(new Fast())[0]).toBe(LAYOUT);
	expect(encodeSlowState(newSlow())[0]).toBe(LAYOUT);
	const foreign = Uint8Array.of(LAYOUT + 1, 0, 0);
	expect(() => decodeFastState(foreign)).toThrow(RangeError);
	expect(() => decodeSlowState(foreign)).toThrow(RangeError);
});
