import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { isLate, lastDecisionAtMs, mustWait, newGroup, setMember, slowRevision } from './group';
import { bays, beats, drives, memberOf, MIN, plus, QUIET, READY, S, Street } from './rows.fixture';

const CAR: Vec3 = [60, 90, -80];
const TAKEN = plus(QUIET, CAR);
const rowAt = (street: Street, nodeId: number, atMs: number) =>
	street.item({ nodeId, atMs, fieldMg: QUIET });

describe('waiting for a neighbour', () => {
	test('a quiet group waits for nobody', () => {
		const street = new Street(bays(2)).commission();
		expect(mustWait(street.group, rowAt(street, 1, READY), () => READY - S)).toBe(false);
	});

	test('an active group waits for a neighbour heard within 5 s of event time, but not as far', () => {
		const street = new Street(bays(2)).commission();
		street.play(drives(1, READY, QUIET, TAKEN).slice(0, 3));
		const row = rowAt(street, 1, READY + 2 * S);
		expect(mustWait(street.group, row, () => READY + S)).toBe(true);
		expect(mustWait(street.group, row, () => READY + 2 * S)).toBe(false);
		expect(mustWait(street.group, row, () => READY - 4 * S)).toBe(false);
	});
});

describe('late items', () => {
	test('a row before its node’s last one is late', () => {
		const street = new Street().commission();
		street.play(beats(1, READY, READY + 3 * MIN, QUIET));
		expect(isLate(street.group, rowAt(street, 1, READY + MIN))).toBe(true);
		expect(isLate(street.group, rowAt(street, 1, READY + 4 * MIN))).toBe(false);
	});

	test('a neighbour’s row at or before a decision that it could have changed is late', () => {
		const street = new Street(bays(2)).commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 3 * MIN, TAKEN));
		const decided = street.entries(1).at(-1)!.decidedAtMs;
		expect(lastDecisionAtMs(street.group)).toBe(decided);
		expect(isLate(street.group, rowAt(street, 2, decided))).toBe(true);
		expect(isLate(street.group, rowAt(street, 2, decided + 1))).toBe(false);
	});

	test('a group that never decided says 0', () => {
		expect(lastDecisionAtMs(newGroup(bays(2)))).toBe(0);
	});
});

test('an item of a node that is not of the group is a bug, and thrown', () => {
	expect(() => new Street().play(beats(9, READY, READY + MIN, QUIET))).toThrow(RangeError);
});

test('new parameters hold from the next item on', () => {
	const street = new Street().commission();
	expect(street.view().onMg).toBe(35);
	setMember(street.group, memberOf(1, { params: { onMg: 90 } }));
	expect(street.view().onMg).toBe(90);
});

test('quiet readings leave the slow revision as it is', () => {
	const street = new Street().commission();
	const before = slowRevision(street.group, 1);
	street.play(beats(1, READY, READY + 20 * MIN, QUIET, 10 * S));
	expect(slowRevision(street.group, 1)).toBe(before);
	street.play(drives(1, READY + 20 * MIN, QUIET, TAKEN));
	expect(slowRevision(street.group, 1)).toBeGreaterThan(before);
});

test('before any reading there is no field, baseline or noise to show', () => {
	expect(new Street().view()).toMatchObject({
		state: 'unknown',
		sinceMs: null,
		confidence: null,
		fieldMg: null,
		baselineMg: null,
		offsetMg: null,
		disturbanceMg: null,
		sigmaMg: null,
		lastKnown: null
	});
});

test('nodes chained within 4 m are neighbours two by two, not end to end', () => {
	const { nodes } = newGroup(bays(3));
	expect(nodes.map((n) => n.near.map((m) => m.id))).toEqual([[2], [1, 3], [2]]);
	expect(nodes.map((n) => n.mates.map((m) => m.id))).toEqual([
		[2, 3],
		[1, 3],
		[1, 2]
	]);
});
