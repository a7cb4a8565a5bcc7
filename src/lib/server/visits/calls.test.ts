import { expect, test } from 'vitest';
import { callsOf, type Calling } from './calls';

/* Issue 6, 'Visits': asked for from film refresh not cured, silent, clipped, low cell; one request a bay.
   Patience as params.ts states it: silent 24 h, low cell at once. */
const H = 3_600_000;
const NOW = 100 * H;
const silentSince = (hoursAgo: number): Calling => ({
	...{ bayId: 1, nodeId: 11, kinds: ['silent'] },
	entries: [{ atMs: NOW - hoursAgo * H, kinds: ['silent'] }]
});

test('a node silent for a day sends somebody, one silent for an hour does not', () => {
	expect(callsOf([silentSince(25)], [], NOW).ask).toEqual([
		{ bayId: 1, nodeId: 11, cause: 'silent' }
	]);
	expect(callsOf([silentSince(1)], [], NOW).ask).toEqual([]);
});

test('silence that ended in between counts from its second begin', () => {
	const notice: Calling = {
		...{ bayId: 1, nodeId: 11, kinds: ['silent', 'low_cell'] },
		entries: [
			{ atMs: NOW - 50 * H, kinds: ['silent', 'low_cell'] },
			{ atMs: NOW - 30 * H, kinds: ['low_cell'] },
			{ atMs: NOW - 2 * H, kinds: ['silent', 'low_cell'] }
		]
	};
	expect(callsOf([notice], [], NOW).ask.map(({ cause }) => cause)).toEqual(['low_cell']);
});

test('what is asked for already is not asked for twice', () => {
	const held = { id: 5, bayId: 1, cause: 'silent' as const, endedAtMs: null };
	expect(callsOf([silentSince(25)], [held], NOW)).toEqual({ ask: [], over: [] });
});

test('a node heard again takes its cause back; a wish of a person stays', () => {
	const held = [
		{ id: 5, bayId: 1, cause: 'silent' as const, endedAtMs: null },
		{ id: 6, bayId: 1, cause: 'by_hand' as const, endedAtMs: null },
		{ id: 7, bayId: 2, cause: 'not_cured' as const, endedAtMs: null }
	];
	expect(callsOf([], held, NOW)).toEqual({ ask: [], over: [5] });
});

test('kinds that no visit cures send nobody', () => {
	const notice: Calling = {
		...{ bayId: 1, nodeId: 11, kinds: ['refresh_due', 'drifting', 'clock_off'] },
		entries: [{ atMs: 0, kinds: ['refresh_due', 'drifting', 'clock_off'] }]
	};
	expect(callsOf([notice], [], NOW).ask).toEqual([]);
});
