import { expect, test } from 'vitest';
import { diffHistory, type Told } from './feed';
import { T0 } from './rows.fixture';
import type { HistoryEntry } from './types';

const entry = (atMs: number, over: Partial<HistoryEntry> = {}): HistoryEntry => ({
	nodeId: 1,
	type: 'arrival',
	state: 'occupied',
	atMs,
	uncertaintyS: 1,
	confidence: 0.97,
	evidence: { because: [], against: [] },
	decidedAtMs: atMs + 4000,
	...over
});
const told = (eventId: number, atMs: number, over: Partial<Told<number>> = {}): Told<number> => ({
	eventId,
	nodeId: 1,
	type: 'arrival',
	state: 'occupied',
	atMs,
	...over
});

test('the same history needs no word', () => {
	expect(diffHistory([told(1, T0)], [entry(T0)])).toEqual({ voids: [], enters: [] });
});

test('a time moved by 59,999 ms is not told again', () => {
	expect(diffHistory([told(1, T0)], [entry(T0 + 59_999)])).toEqual({ voids: [], enters: [] });
});

test('a time moved by 60 s is taken back and told anew', () => {
	const moved = entry(T0 + 60_000);
	expect(diffHistory([told(1, T0)], [moved])).toEqual({ voids: [told(1, T0)], enters: [moved] });
});

test('what never happened is voided by naming its event', () => {
	expect(diffHistory([told(7, T0)], []).voids).toEqual([told(7, T0)]);
});

test('what was missed is entered', () => {
	expect(diffHistory([], [entry(T0)]).enters).toEqual([entry(T0)]);
});

test.each([
	['node', { nodeId: 2 }],
	['type', { type: 'known' as const }],
	['state', { state: 'vacant' as const }]
])('another %s at the same time is another entry', (_, over) => {
	const diff = diffHistory([told(1, T0)], [entry(T0, over)]);
	expect(diff.voids).toHaveLength(1);
	expect(diff.enters).toHaveLength(1);
});

test('two arrivals within a minute are matched one to one, the nearest first', () => {
	const second = entry(T0 + 30_000);
	expect(diffHistory([told(1, T0)], [entry(T0), second])).toEqual({ voids: [], enters: [second] });
	expect(diffHistory([told(1, T0), told(2, T0 + 30_000)], [second]).voids).toEqual([
		told(2, T0 + 30_000)
	]);
});
