import type { BayItem } from '$lib/components/plan/types';
import { ask, AskError } from './ask';

type Listed = BayItem | { code: string; removed: true };
interface BaysAnswer {
	items: Listed[];
	next: string | null;
	changes: number;
}
/** All bays of a site as last told, and the cursor for what changed since. */
export interface BayBook {
	bays: ReadonlyMap<string, BayItem>;
	changes: number;
}
export interface Polled {
	book: BayBook;
	asOfMs: number | null;
}

export const EMPTY: BayBook = { bays: new Map(), changes: 0 };

const PAGE = 1000;
const removed = (item: Listed): item is { code: string; removed: true } => 'removed' in item;

/** The whole list, page by page; `changes` is fixed by the first page, so nothing falls between. */
export async function wholeList(site: string, fetcher = fetch): Promise<Polled> {
	const bays = new Map<string, BayItem>();
	let path: string | null = `/api/v1/sites/${site}/bays?limit=${PAGE}`;
	let changes: number | null = null;
	let asOfMs: number | null = null;
	while (path !== null) {
		const answer: { body: BaysAnswer; asOfMs: number | null } = await ask<BaysAnswer>(
			path,
			{},
			fetcher
		);
		for (const item of answer.body.items) if (!removed(item)) bays.set(item.code, item);
		changes ??= answer.body.changes;
		asOfMs ??= answer.asOfMs;
		path =
			answer.body.next === null
				? null
				: `/api/v1/sites/${site}/bays?limit=${PAGE}&cursor=${encodeURIComponent(answer.body.next)}`;
	}
	return { book: { bays, changes: changes ?? 0 }, asOfMs };
}

/**
 * What changed since `book`. The same book comes back when nothing did, so that nothing is drawn anew;
 * a cursor older than retention (410) reads the whole list again.
 */
export async function pollBays(site: string, book: BayBook): Promise<Polled> {
	let answer;
	try {
		answer = await ask<BaysAnswer>(
			`/api/v1/sites/${site}/bays?changes=${book.changes}&limit=${PAGE}`
		);
	} catch (error) {
		if (error instanceof AskError && error.status === 410) return await wholeList(site);
		throw error;
	}
	const { items, next, changes } = answer.body;
	if (next !== null) return await wholeList(site);
	if (items.length === 0 && changes === book.changes) return { book, asOfMs: answer.asOfMs };
	const bays = new Map(book.bays);
	for (const item of items) {
		if (removed(item)) bays.delete(item.code);
		else bays.set(item.code, item);
	}
	return { book: { bays, changes }, asOfMs: answer.asOfMs };
}
