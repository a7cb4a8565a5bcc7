import { describe, expect, test } from 'vitest';
import { generate } from './generate';
import { frameOfArrived, inArrivalOrder, inEventOrder } from './items';
import { EASY } from './scenarios/base';
import { HARD } from './scenarios/lines';

const SHORT = { ...EASY, days: 0.25 };
const ROUGH = { ...HARD, days: 0.25 };
/** Inventing a site takes seconds on a busy machine. */
const TIMEOUT_MS = 60_000;

const digest = (seed: number, scenario = SHORT) => {
	const { truth, logs } = generate(scenario, seed);
	const counts = logs.map((log) => log.counts.values.subarray(0, log.rows * 3));
	return { stays: truth.stays, rows: logs.map(({ rows }) => rows), sum: counts.map(checksum) };
};
const checksum = (values: Int32Array) => values.reduce((sum, v) => (sum * 31 + v) | 0, 7);

describe('the pure generator', { timeout: TIMEOUT_MS }, () => {
	test('makes the same site from the same seed, and another from another', () => {
		expect(digest(4)).toEqual(digest(4));
		expect(digest(4).sum).not.toEqual(digest(5).sum);
	});

	test('reports every 60 s while nothing moves, and several times a second when it does', () => {
		const generated = generate(SHORT, 4);
		const times = [...inEventOrder(generated, [3])]
			.filter(({ atMs }) => atMs > generated.truth.judgedFromMs)
			.map(({ atMs }) => atMs);
		const gaps = times.slice(1).map((atMs, i) => atMs - times[i]!);
		expect(Math.max(...gaps)).toBeLessThanOrEqual(60_000);
		expect(gaps.filter((gap) => gap <= 1000).length).toBeGreaterThan(100);
		// Most of a bay's day is quiet.
		expect(times.length).toBeLessThan(0.2 * ((6 * 3_600_000) / 500));
	});

	test('hands over every row once, in the order of the node, though messages come twice and late', () => {
		const generated = generate(ROUGH, 6);
		expect(generated.truth.facts.duplicated).toBeGreaterThan(0);
		expect(generated.truth.facts.reordered).toBeGreaterThan(0);
		const last = new Map<number, [number, number, number]>();
		let rows = 0;
		for (const item of inEventOrder(generated)) {
			if (item.kind !== 'row') continue;
			rows++;
			const before = last.get(item.nodeIndex) ?? [-1, -1, -1];
			const now: [number, number, number] = [item.boot, item.seq, item.row];
			expect(compare(now, before)).toBeGreaterThan(0);
			last.set(item.nodeIndex, now);
		}
		const heard = generated.deliveries.map(({ message }, i) =>
			[...new Set(message)].reduce((sum, m) => sum + generated.logs[i]!.rowCount.values[m]!, 0)
		);
		expect(rows).toBe(heard.reduce((a, b) => a + b, 0));
	});

	test('gives frames as the wire has them: dt rising from 0, at most 120 rows, sent after its rows', () => {
		const generated = generate(SHORT, 8);
		for (const arrived of inArrivalOrder(generated).slice(0, 3000)) {
			const frame = frameOfArrived(generated, arrived);
			if (frame.kind !== 'reading') continue;
			expect(frame.rows[0]!.dtMs).toBe(0);
			frame.rows.forEach((row, i) =>
				expect(row.dtMs).toBeGreaterThan(frame.rows[i - 1]?.dtMs ?? -1)
			);
			expect(frame.rows.length).toBeLessThanOrEqual(120);
			expect(frame.sentMs).toBeGreaterThanOrEqual(frame.t + frame.rows.at(-1)!.dtMs);
			expect(Number.isInteger(frame.t)).toBe(true);
		}
	});

	test('keeps vehicles, echoes and passes inside the sizes of method 11', () => {
		const { facts } = generate({ ...HARD, days: 0.5 }, 9).truth;
		expect(facts.leastVehicleMg).toBeGreaterThan(30);
		expect(facts.mostVehicleMg).toBeLessThanOrEqual(1000);
		expect(facts.mostEchoMg).toBeLessThanOrEqual(80.001);
		// Drawn on a grid along the lane; between its points the peak may be a little higher.
		expect(facts.mostPassMg).toBeLessThan(66);
		expect(facts.coldestC).toBeGreaterThanOrEqual(-20);
		expect(facts.warmestC).toBeLessThanOrEqual(60);
	});
});

function compare(a: readonly number[], b: readonly number[]): number {
	for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return a[i]! - b[i]!;
	return 0;
}

test(
	'a vehicle that stands changes the field at its node by its size',
	{ timeout: TIMEOUT_MS },
	() => {
		const generated = generate(
			{
				...SHORT,
				noiseMg: [0, 0],
				traffic: null,
				climate: { meanC: 25, halfSwingC: 0, spellC: 0, cloudC: 0 }
			},
			12
		);
		const stay = generated.truth.stays.find((s) => s.toMs - s.fromMs > 1_800_000)!;
		const nodeIndex = generated.plan.nodes.findIndex((n) => n.bayIndex === stay.bayIndex);
		const near = (atMs: number) =>
			[...inEventOrder(generated, [nodeIndex])]
				.filter((i) => i.kind === 'row')
				.filter((i) => i.atMs <= atMs)
				.at(-1)!;
		const before = near(stay.fromMs - 20_000);
		const during = near(stay.fromMs + 60_000);
		const moved = Math.hypot(...before.counts.map((c, i) => c - during.counts[i]!)) / 16.384;
		// Neighbours may come and go meanwhile; 1 count is 0.06 mG.
		expect(Math.abs(moved - stay.sizeMg)).toBeLessThan(0.15 * stay.sizeMg);
	}
);
