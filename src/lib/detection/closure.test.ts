import { expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { beats, drives, HOUR, MIN, plus, QUIET, READY, Street } from './rows.fixture';

const CAR: Vec3 = [60, 90, -80];
const END = READY + 2 * HOUR;

function closed(during: Vec3, after: Vec3 = during): Street {
	const street = new Street().commission();
	street.act(READY, { kind: 'close', toMs: END, reason: 'works' });
	street.play(
		beats(1, READY + MIN, END - HOUR, during),
		beats(1, END - HOUR, END + 10 * MIN, after)
	);
	return street;
}
const done = (street: Street) => street.told.filter((o) => o.kind === 'act_done').at(-1);

test('a closure that ends before it begins is refused', () => {
	const street = new Street().commission();
	street.act(READY, { kind: 'close', toMs: READY, reason: 'works' });
	expect(done(street)).toMatchObject({ ok: false, why: 'the closure ends before it begins' });
});

test('at the end a field within 10 mG of the reference resumes without a doubt', () => {
	const street = closed(plus(QUIET, [8, 0, 0]));
	expect(street.view()).toMatchObject({ state: 'vacant', doubt: null });
});

test('at the end a field 15 mG off is doubtful: after works', () => {
	const street = closed(plus(QUIET, [15, 0, 0]));
	expect(street.view().doubt).toMatchObject({ reason: 'after works' });
	expect(street.view().doubt!.sinceMs).toBeGreaterThanOrEqual(END);
});

test('the detector goes on recording while the bay is closed', () => {
	const street = new Street().commission();
	street.act(READY, { kind: 'close', toMs: END, reason: 'event' });
	street.play(
		drives(1, READY + MIN, QUIET, plus(QUIET, CAR)),
		beats(1, READY + 2 * MIN, READY + 10 * MIN, plus(QUIET, CAR)),
		drives(1, READY + 10 * MIN, plus(QUIET, CAR), QUIET),
		beats(1, READY + 11 * MIN, END + 5 * MIN, QUIET)
	);
	expect(street.moves()).toEqual(['arrival', 'departure']);
	expect(street.view()).toMatchObject({ state: 'vacant', doubt: null });
});

test('a bay still called taken whose field is the reference at the end resumes as vacant', () => {
	const street = new Street().commission();
	street.act(READY, { kind: 'settle', as: 'seen_occupied', by: 'walker' });
	street.act(READY, { kind: 'close', toMs: END, reason: 'works' });
	street.play(beats(1, READY + MIN, END + 5 * MIN, QUIET));
	expect(street.entries().at(-1)).toMatchObject({ type: 'known', state: 'vacant' });
});

test('lifting ends a closure early with the same check; without one it is refused', () => {
	const street = new Street().commission();
	street.act(READY, { kind: 'lift' });
	expect(done(street)).toMatchObject({ ok: false, why: 'the bay is not closed' });
	street.act(READY, { kind: 'close', toMs: END, reason: 'works' });
	street.play(beats(1, READY + MIN, READY + 30 * MIN, plus(QUIET, [15, 0, 0])));
	street.act(READY + 30 * MIN, { kind: 'lift' });
	expect(done(street)).toMatchObject({ ok: true });
	expect(street.view().doubt).toMatchObject({ reason: 'after works' });
});
