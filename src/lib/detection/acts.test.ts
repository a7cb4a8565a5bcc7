import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { beats, drives, HOUR, MIN, plus, QUIET, READY, Street } from './rows.fixture';

const CAR: Vec3 = [60, 90, -80];
const TAKEN = plus(QUIET, CAR);

/** A vehicle came and stands; one heartbeat a minute until 10 min after READY. */
function taken(): Street {
	const street = new Street().commission();
	street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 10 * MIN, TAKEN));
	return street;
}
const NOW = READY + 10 * MIN;
const done = (street: Street) => street.told.filter((o) => o.kind === 'act_done').at(-1);
const settle = (street: Street, as: 'seen_vacant' | 'told_vacant' | 'seen_occupied', atMs = NOW) =>
	street.act(atMs, { kind: 'settle', as, by: 'walker' });

describe('settling', () => {
	test('seen vacant sets the state and takes the present level as baseline', () => {
		const street = taken();
		settle(street, 'seen_vacant');
		expect(street.view()).toMatchObject({ state: 'vacant', doubt: null, sinceMs: NOW });
		expect(street.view().baselineMg![1]).toBeCloseTo(TAKEN[1], -0.5);
		expect(street.entries().at(-1)).toMatchObject({ type: 'settled', state: 'vacant' });
		expect(street.entries().at(-1)!.evidence.because).toEqual(['seen free by walker']);
	});

	test('told vacant asks the node, takes no baseline and leaves a doubt', () => {
		const street = taken();
		const before = street.view().baselineMg;
		settle(street, 'told_vacant');
		expect(street.view()).toMatchObject({ state: 'vacant', baselineMg: before });
		expect(street.view().doubt?.reason).toBe('told free, not seen');
		expect(street.asks()).toContain('reading: settled by hearsay');
		expect(street.view().confidence).toBeLessThanOrEqual(0.5);
		street.play(beats(1, NOW + MIN, NOW + 2 * HOUR, TAKEN));
		expect(street.view().baselineMg![1]).toBeCloseTo(before![1], -0.5);
	});

	test('seen occupied on a bay held vacant sets the state, since now', () => {
		const street = new Street().commission();
		settle(street, 'seen_occupied', READY);
		expect(street.view()).toMatchObject({ state: 'occupied', sinceMs: READY, doubt: null });
		expect(street.entries().at(-1)!.evidence.because).toEqual(['seen taken by walker']);
	});

	test('seen occupied restarts the clock of the stay', () => {
		const street = taken();
		settle(street, 'seen_occupied');
		expect(street.group.nodes[0]!.slow.arrival!.atMs).toBe(NOW);
	});

	test('a vehicle seen by a person departs by its own step', () => {
		const street = taken();
		settle(street, 'seen_occupied');
		street.play(drives(1, NOW + MIN, TAKEN, QUIET), beats(1, NOW + 2 * MIN, NOW + 5 * MIN, QUIET));
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});

	test('seen taken on a level that the baseline had taken in: the first step is the leaving', () => {
		const street = new Street().commission('rule', TAKEN);
		settle(street, 'seen_occupied', READY);
		street.play(
			beats(1, READY + 5000, READY + 10 * MIN, TAKEN),
			drives(1, NOW, TAKEN, QUIET),
			beats(1, NOW + MIN, NOW + 5 * MIN, QUIET)
		);
		expect(street.moves()).toEqual(['departure']);
		expect(street.view().baselineMg![1]).toBeCloseTo(QUIET[1], -0.5);
	});

	test('seen taken where the field stands at a reference seen empty: a step is the next vehicle’s', () => {
		const street = new Street().commission();
		settle(street, 'seen_occupied', READY);
		street.play(
			beats(1, READY + 5000, READY + 10 * MIN, QUIET),
			drives(1, NOW, QUIET, TAKEN),
			beats(1, NOW + MIN, NOW + 5 * MIN, TAKEN)
		);
		expect(street.moves()).toEqual([]);
		expect(street.view().state).toBe('occupied');
		street.play(
			drives(1, NOW + 5 * MIN, TAKEN, QUIET),
			beats(1, NOW + 6 * MIN, NOW + 9 * MIN, QUIET)
		);
		expect(street.moves()).toEqual(['departure']);
	});

	test('a settlement ends a doubt', () => {
		const street = taken();
		street.group.nodes[0]!.slow.doubt = { reason: 'magnet', sinceMs: NOW };
		settle(street, 'seen_occupied');
		expect(street.view().doubt).toBeNull();
	});

	test('nobody settles a bay without an accepted quiet field', () => {
		const street = new Street();
		settle(street, 'seen_vacant');
		expect(done(street)).toMatchObject({ ok: false });
	});
});

describe('undo of a settlement', () => {
	test('puts back state, since, baseline and doubt, and voids what was told', () => {
		const street = taken();
		const before = street.view();
		street.group.nodes[0]!.slow.doubt = { reason: 'magnet', sinceMs: READY };
		const id = settle(street, 'seen_vacant');
		street.act(NOW + MIN, { kind: 'undo_settle', settleActId: id });
		expect(done(street)).toMatchObject({ ok: true, why: null });
		expect(street.view()).toMatchObject({
			state: 'occupied',
			sinceMs: before.sinceMs,
			baselineMg: before.baselineMg,
			doubt: { reason: 'magnet', sinceMs: READY }
		});
		expect(street.voids()).toMatchObject([{ type: 'settled', atMs: NOW }]);
	});

	test('is possible for 24 h and not a minute longer', () => {
		for (const [lateMs, ok] of [
			[24 * HOUR, true],
			[24 * HOUR + MIN, false]
		] as const) {
			const street = taken();
			const id = settle(street, 'seen_vacant');
			street.act(NOW + lateMs, { kind: 'undo_settle', settleActId: id });
			expect(done(street)).toMatchObject({ ok });
		}
	});

	test('is refused when the bay has changed since', () => {
		const street = taken();
		const id = settle(street, 'seen_occupied');
		street.play(drives(1, NOW + MIN, TAKEN, QUIET), beats(1, NOW + 2 * MIN, NOW + 5 * MIN, QUIET));
		street.act(NOW + 6 * MIN, { kind: 'undo_settle', settleActId: id });
		expect(done(street)).toMatchObject({ ok: false, why: 'the bay has changed since' });
	});

	test('is refused for another settlement, and twice', () => {
		const street = taken();
		const id = settle(street, 'seen_vacant');
		street.act(NOW + MIN, { kind: 'undo_settle', settleActId: id + 90 });
		expect(done(street)).toMatchObject({ ok: false });
		street.act(NOW + MIN, { kind: 'undo_settle', settleActId: id });
		street.act(NOW + MIN, { kind: 'undo_settle', settleActId: id });
		expect(done(street)).toMatchObject({ ok: false });
	});

	test('happens by itself when a step brings the field home: the vehicle was there after all', () => {
		const street = taken();
		settle(street, 'seen_vacant');
		street.play(
			beats(1, NOW + MIN, NOW + 10 * MIN, TAKEN),
			drives(1, NOW + 10 * MIN, TAKEN, QUIET),
			beats(1, NOW + 11 * MIN, NOW + 15 * MIN, QUIET)
		);
		expect(street.voids()).toMatchObject([{ type: 'settled', atMs: NOW }]);
		expect(street.moves()).toEqual(['arrival', 'departure']);
		expect(street.view()).toMatchObject({ state: 'vacant' });
		expect(street.view().baselineMg![1]).toBeCloseTo(QUIET[1], -0.5);
	});

	test('does not happen by itself when the field comes home from a settlement that was right', () => {
		const street = new Street().commission();
		settle(street, 'seen_vacant', READY);
		street.play(
			drives(1, READY + MIN, QUIET, TAKEN),
			beats(1, READY + 2 * MIN, READY + 10 * MIN, TAKEN),
			drives(1, READY + 10 * MIN, TAKEN, QUIET)
		);
		expect(street.voids()).toEqual([]);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});
});

test('withdrawing makes the bay unknown, and the node learns only when placed again', () => {
	const street = taken();
	street.act(NOW, { kind: 'withdraw' });
	expect(street.view()).toMatchObject({ state: 'unknown', conditions: ['learning'] });
	street.play(beats(1, NOW + MIN, NOW + 30 * MIN, QUIET, 2000));
	expect(street.entries().at(-1)).toMatchObject({ type: 'unknown', atMs: NOW });
});

test('every act is answered, new parameters too', () => {
	const street = taken();
	const id = street.act(NOW, { kind: 'parameters' });
	expect(done(street)).toEqual({ kind: 'act_done', actId: id, ok: true, why: null });
});
