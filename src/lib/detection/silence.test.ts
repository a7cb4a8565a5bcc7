import { expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import {
	beats,
	BURST_MS,
	drives,
	memberOf,
	MIN,
	plus,
	QUIET,
	READY,
	S,
	Street
} from './rows.fixture';

const CAR: Vec3 = [60, 90, -80];
const TAKEN = plus(QUIET, CAR);
const GRACE_MS = 15 * MIN;
const lastHeardMs = READY - 30 * S;

test('a gap over the grace time was unknown from its end on, and is known again', () => {
	const street = new Street().commission();
	const backMs = READY + 40 * MIN;
	street.play(beats(1, backMs, backMs + 5 * MIN, QUIET));
	expect(street.entries().slice(1)).toMatchObject([
		{ type: 'unknown', state: 'unknown', atMs: lastHeardMs + GRACE_MS, confidence: null },
		{ type: 'known', state: 'vacant', atMs: backMs }
	]);
	expect(street.view().lastKnown).toEqual({ state: 'vacant', atMs: lastHeardMs + GRACE_MS });
	expect(street.entries().at(-1)!.evidence.because.join()).toContain('not known');
});

test('a gap within the grace time was never unknown', () => {
	const street = new Street().commission();
	street.play(beats(1, lastHeardMs + GRACE_MS, READY + 20 * MIN, QUIET));
	expect(street.entries()).toHaveLength(1);
});

test('the grace time is the member’s own', () => {
	const street = new Street([memberOf(1, { graceS: 1800 })]).commission();
	street.play(beats(1, READY + 20 * MIN, READY + 25 * MIN, QUIET));
	expect(street.entries()).toHaveLength(1);
});

test('a taken bay that was silent is known taken again, its arrival being what it was', () => {
	const street = new Street().commission();
	street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 5 * MIN, TAKEN));
	const arrivedMs = street.entries().at(-1)!.atMs;
	street.play(beats(1, READY + 60 * MIN, READY + 65 * MIN, TAKEN));
	expect(street.entries().slice(-2)).toMatchObject([
		{ type: 'unknown' },
		{ type: 'known', state: 'occupied' }
	]);
	expect(street.group.nodes[0]!.slow.arrival?.atMs).toBe(arrivedMs);
	expect(street.moves()).toEqual(['arrival']);
});

test('a vehicle that came during a long silence is known, not an arrival', () => {
	const street = new Street().commission();
	street.play(beats(1, READY + 60 * MIN, READY + 70 * MIN, TAKEN));
	expect(street.entries().slice(-2)).toMatchObject([
		{ type: 'unknown' },
		{ type: 'known', state: 'occupied' }
	]);
	expect(street.view().state).toBe('occupied');
	street.play(drives(1, READY + 70 * MIN, TAKEN, QUIET));
	expect(street.moves()).toEqual(['departure']);
});

test('a vehicle that left during a long silence leaves the bay known vacant', () => {
	const street = new Street().commission();
	street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 5 * MIN, TAKEN));
	street.play(beats(1, READY + 60 * MIN, READY + 65 * MIN, QUIET));
	expect(street.entries().at(-1)).toMatchObject({ type: 'known', state: 'vacant' });
	expect(street.moves()).toEqual(['arrival']);
});

test('a node that never came into service has no silence', () => {
	const street = new Street();
	street.play(
		beats(1, READY, READY + 5 * MIN, QUIET),
		beats(1, READY + 90 * MIN, READY + 95 * MIN, QUIET)
	);
	expect(street.entries()).toEqual([]);
});

const clippedRows = (atMs: number, count: number) =>
	beats(1, atMs, atMs + count * BURST_MS, [8000, 0, 0], BURST_MS).map((r) => ({
		...r,
		clipped: true
	}));

test('clipped needs 2 readings', () => {
	const street = new Street().commission();
	street.play(clippedRows(READY, 1));
	// One makes a film refresh due (method 6), but no state.
	expect(street.view().conditions).toEqual(['refresh_due']);
	street.play(clippedRows(READY + BURST_MS, 1));
	expect(street.view().conditions).toContain('clipped');
});

test('a clipped reading between good ones makes no condition and moves no state', () => {
	const street = new Street().commission();
	for (const k of [0, 1, 2]) {
		street.play(
			clippedRows(READY + k * MIN, 1),
			beats(1, READY + k * MIN + 10 * S, READY + (k + 1) * MIN, QUIET, 10 * S)
		);
	}
	expect(street.view()).toMatchObject({
		state: 'vacant',
		conditions: expect.not.arrayContaining(['clipped'])
	});
	expect(street.moves()).toEqual([]);
});

test('an overload that lasts makes the bay unknown since it began, and known when it ends', () => {
	const street = new Street().commission();
	street.play(clippedRows(READY, 30));
	expect(street.view()).toMatchObject({ state: 'unknown', lastKnown: { state: 'vacant' } });
	expect(street.entries().at(-1)).toMatchObject({ type: 'unknown', atMs: READY });
	street.play(
		beats(1, READY + 16 * S, READY + 30 * S, QUIET, S),
		beats(1, READY + MIN, READY + 9 * MIN, QUIET)
	);
	expect(street.entries().at(-1)).toMatchObject({ type: 'known', state: 'vacant' });
	expect(street.view().conditions).not.toContain('clipped');
});
