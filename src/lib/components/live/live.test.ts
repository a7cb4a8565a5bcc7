import { afterEach, expect, test, vi } from 'vitest';
import type { BayItem } from '$lib/components/plan/types';
import { AskError } from './ask';
import { pollBays, wholeList } from './bay-poll';
import { liveText } from './live-words';

const bay = (code: string, state: BayItem['state'] = 'vacant'): BayItem => ({
	code,
	zone: 'n',
	state,
	since: null,
	confidence: 0.9,
	doubt: null,
	condition: 'in_service',
	also: [],
	lastKnown: null,
	closed: null,
	node: null
});
const answers = (...list: { status?: number; body: unknown }[]) => {
	const asked: string[] = [];
	vi.stubGlobal('fetch', async (path: string) => {
		asked.push(path);
		const next = list.shift();
		return new Response(JSON.stringify(next?.body ?? {}), {
			status: next?.status ?? 200,
			headers: { 'site-as-of': '2026-03-03T06:55:31.000Z' }
		});
	});
	return asked;
};
afterEach(() => vi.unstubAllGlobals());

test('the whole list is read page by page and keeps the cursor of the first page', async () => {
	answers(
		{ body: { items: [bay('A')], next: 'n1', changes: 7 } },
		{ body: { items: [bay('B')], next: null, changes: 9 } }
	);
	const { book, asOfMs } = await wholeList('s', (...a) => fetch(...a));
	expect([...book.bays.keys()]).toEqual(['A', 'B']);
	expect(book.changes).toBe(7);
	expect(asOfMs).toBe(Date.UTC(2026, 2, 3, 6, 55, 31));
});
test('a poll without changes gives the very same book', async () => {
	answers({ body: { items: [], next: null, changes: 7 } });
	const book = { bays: new Map([['A', bay('A')]]), changes: 7 };
	expect((await pollBays('s', book)).book).toBe(book);
});
test('changes are put in, removed bays are taken out', async () => {
	const asked = answers({
		body: { items: [bay('A', 'occupied'), { code: 'B', removed: true }], next: null, changes: 9 }
	});
	const book = { bays: new Map([bay('A'), bay('B')].map((b) => [b.code, b])), changes: 7 };
	const { book: next } = await pollBays('s', book);
	expect([...next.bays.values()].map((b) => [b.code, b.state])).toEqual([['A', 'occupied']]);
	expect([next.changes, book.bays.size]).toEqual([9, 2]);
	expect(asked[0]).toContain('changes=7');
});
test('a cursor older than retention reads the whole list again', async () => {
	answers(
		{ status: 410, body: { detail: 'gone' } },
		{ body: { items: [bay('C')], next: null, changes: 3 } }
	);
	const { book } = await pollBays('s', { bays: new Map(), changes: 1 });
	expect([...book.bays.keys()]).toEqual(['C']);
});
test('signed out is told as such', async () => {
	answers({ status: 401, body: { detail: 'no session' } });
	const error = await pollBays('s', { bays: new Map(), changes: 1 }).catch((e: unknown) => e);
	expect(error instanceof AskError && error.status).toBe(401);
});

const NOW_MS = Date.UTC(2026, 2, 3, 7, 0, 0);
const live = {
	status: 'live' as const,
	asOf: '',
	lateSince: null,
	nodesHeard: 39,
	nodesExpected: 40
};
const well = { signedOut: false, answeredAtMs: NOW_MS - 1000 };
test('live, late, no answer and signed out each have their words; only live is not struck', () => {
	expect(liveText(live, well, 'UTC', NOW_MS)).toEqual({
		struck: false,
		text: 'live, 39 of 40 nodes heard'
	});
	const late = { ...live, status: 'late' as const, lateSince: '2026-03-03T06:48:00.000Z' };
	expect(liveText(late, well, 'UTC', NOW_MS)).toEqual({
		struck: true,
		text: 'late since 06:48 (12 min), 39 of 40 nodes heard'
	});
	expect(liveText(live, { ...well, answeredAtMs: NOW_MS - 60_000 }, 'UTC', NOW_MS).text).toBe(
		'no answer from Lodekeep since 06:59 (1 min)'
	);
	expect(liveText(live, { ...well, signedOut: true }, 'UTC', NOW_MS).struck).toBe(true);
});
