import { z } from 'zod';
import type { EventView } from '$lib/schemas/v1/feed';
import * as changes from '$lib/server/store/queries/changes';
import * as events from '$lib/server/store/queries/events';
import type { SiteRow } from '$lib/server/store/queries/sites';
import { snapshot } from '$lib/server/store/transaction';
import { ok, type Answer } from './answer';
import { badCursor, cursorProblem } from './bays';
import { decodeCursor, encodeCursor, fixedCursor } from './cursor';
import type { Instance } from './instance';
import type { Problem } from './problem';
import { rfc3339 } from './time';
import { confidenceOf } from './bay-view';

export function eventView(row: events.EventRow): EventView {
	return {
		id: row.id,
		bay: row.bay,
		type: row.type,
		state: row.state,
		at: rfc3339(row.atMs),
		recordedAt: rfc3339(row.recordedAtMs),
		confidence: confidenceOf(row.confidence20),
		uncertaintyS: row.uncertaintyS,
		late: Number(row.late) === 1,
		...(row.voids === null ? {} : { voids: row.voids })
	};
}

export interface EventQuery {
	site: SiteRow;
	personal: boolean;
	nowMs: number;
	after: number | undefined;
	from: number | undefined;
	to: number | undefined;
	bay: string | undefined;
	effective: boolean;
	limit: number;
	cursor: string | undefined;
}

/** The unbroken run of a site's events; the end is fixed when the first page is read. */
export async function listEvents(app: Instance, q: EventQuery): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? null : decodeCursor(fixedCursor, q.cursor);
	if (q.cursor !== undefined && at === null) return badCursor();
	return await snapshot(app.store, async (tx) => {
		const newest = await changes.cursor(tx.sql, q.site.id);
		const upTo = at?.changes ?? newest;
		if (q.after !== undefined && at === null) {
			const trouble = cursorProblem(q.site, q.after, newest);
			if (trouble !== null) return trouble;
		}
		const rows = await events.page(tx.sql, {
			siteId: q.site.id,
			afterId: at?.after ?? q.after ?? 0,
			upTo,
			fromMs: q.from ?? null,
			toMs: q.to ?? null,
			bay: q.bay ?? null,
			effective: q.effective,
			personal: q.personal,
			nowMs: q.nowMs,
			limit: q.limit + 1
		});
		const shown = rows.slice(0, q.limit);
		const last = shown.at(-1);
		const more = rows.length > q.limit && last !== undefined;
		const next = more ? encodeCursor({ after: last.id, changes: upTo }) : null;
		return ok({ items: shown.map(eventView), next, changes: upTo }, { changeId: newest });
	});
}

const changeCursor = z.strictObject({ after: z.int() });

export interface ChangeQuery {
	site: SiteRow;
	personal: boolean;
	after: number;
	limit: number;
	cursor: string | undefined;
}

/**
 * The whole log after an id, in its unbroken run. Changes of personal bays are left out for readers
 * who may not see those; `changes` is then the id that was looked at, not the last one told.
 */
export async function listChanges(app: Instance, q: ChangeQuery): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? null : decodeCursor(changeCursor, q.cursor);
	if (q.cursor !== undefined && at === null) return badCursor();
	const after = at?.after ?? q.after;
	return await snapshot(app.store, async (tx) => {
		const newest = await changes.cursor(tx.sql, q.site.id);
		const start = after === 0 ? q.site.firstChange - 1 : after;
		const trouble = cursorProblem(q.site, start, newest);
		if (trouble !== null) return trouble;
		const rows = await events.namedChanges(tx.sql, q.site.id, start, newest, q.limit + 1);
		const looked = changes.unbroken(rows.slice(0, q.limit), start);
		const last = looked.at(-1)?.id ?? start;
		const seen = looked.filter((row) => q.personal || Number(row.personal) === 0);
		const told = await events.byIds(
			tx.sql,
			q.site.id,
			seen.filter((row) => row.kind === 'event').map((row) => row.id)
		);
		const byId = new Map(told.map((row) => [row.id, eventView(row)]));
		const items = seen.map((row) => ({
			id: row.id,
			kind: row.kind,
			bay: row.bay,
			node: row.node,
			recordedAt: rfc3339(row.recordedAtMs),
			...(byId.has(row.id) ? { event: byId.get(row.id) } : {})
		}));
		const next = rows.length > q.limit ? encodeCursor({ after: last }) : null;
		return ok({ items, next, changes: last }, { changeId: newest });
	});
}
