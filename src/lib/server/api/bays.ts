import type { z } from 'zod';
import type { BayIn, baysIn } from '$lib/schemas/v1/bays';
import { code as codeShape } from '$lib/schemas/v1/common';
import * as bays from '$lib/server/store/queries/bays';
import * as changes from '$lib/server/store/queries/changes';
import * as sites from '$lib/server/store/queries/sites';
import { snapshot, type Tx } from '$lib/server/store/transaction';
import { ok, type Answer } from './answer';
import { decodeCursor, encodeCursor, fixedCursor } from './cursor';
import type { Instance } from './instance';
import type { Media } from './negotiate';
import { normalPolygon } from './polygon';
import { problem, type Problem } from './problem';
import { bayView, featureOf } from './bay-view';

/** An old or a made-up place in the log. */
export function cursorProblem(site: sites.SiteRow, cursor: number, newest: number): Problem | null {
	if (cursor >= site.firstChange - 1 && cursor <= newest) return null;
	const why = cursor > newest ? 'lies ahead of the log' : 'is older than what is kept';
	return problem(410, `This cursor ${why}: read the whole list again.`, {
		members: { firstId: site.firstChange }
	});
}

export const badCursor = (): Problem =>
	problem(400, 'Query: cursor: is not one that this list gave.');

export interface BayQuery {
	site: sites.SiteRow;
	personal: boolean;
	limit: number;
	cursor: string | undefined;
	/** Only what changed since. */
	changes: number | undefined;
	media: Media;
	nowMs: number;
}

/** All bays, or those that changed; the cursor for the next poll is fixed by the first page. */
export async function listBays(app: Instance, q: BayQuery): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? null : decodeCursor(fixedCursor, q.cursor);
	if (q.cursor !== undefined && at === null) return badCursor();
	return await snapshot(app.store, async (tx) => {
		const newest = await changes.cursor(tx.sql, q.site.id);
		const upTo = at?.changes ?? newest;
		const page = {
			siteId: q.site.id,
			personal: q.personal,
			afterId: at?.after ?? 0,
			limit: q.limit + 1
		};
		const closed = await bays.closedAt(tx.db, q.site.id, q.nowMs);
		if (q.changes === undefined) {
			const rows = await bays.page(tx.db, page);
			const items = rows
				.slice(0, q.limit)
				.map((row) => ({ row, view: bayView(row, closed.get(row.id)) }));
			const more = rows.length > q.limit ? items.at(-1)?.row.id : undefined;
			return answerBays(q, items, more, upTo, newest);
		}
		const trouble = cursorProblem(q.site, q.changes, upTo);
		if (trouble !== null) return trouble;
		const named = await bays.changed(tx.sql, { ...page, after: q.changes, upTo });
		const shown = named.slice(0, q.limit);
		const rows = await bays.views(
			tx.db,
			shown.filter((bay) => !bay.gone).map((bay) => bay.bayId)
		);
		const byId = new Map(rows.map((row) => [row.id, row]));
		const items = shown.map(({ bayId, code }) => {
			const row = byId.get(bayId) ?? null;
			const view =
				row === null ? { code, removed: true as const } : bayView(row, closed.get(bayId));
			return { row, view };
		});
		const more = named.length > q.limit ? shown.at(-1)?.bayId : undefined;
		return answerBays(q, items, more, upTo, newest);
	});
}

type Item =
	| { row: bays.BayViewRow; view: ReturnType<typeof bayView> }
	| {
			row: bays.BayViewRow | null;
			view: ReturnType<typeof bayView> | { code: string; removed: true };
	  };

function answerBays(
	q: BayQuery,
	items: readonly Item[],
	moreAfter: number | undefined,
	upTo: number,
	changeId: number
): Answer {
	const next = moreAfter === undefined ? null : encodeCursor({ after: moreAfter, changes: upTo });
	if (q.media === 'application/geo+json') {
		const features = items.map(({ row, view }) =>
			row === null || 'removed' in view
				? { type: 'Feature', id: view.code, geometry: null, properties: view }
				: featureOf(row, view)
		);
		const body = { type: 'FeatureCollection', features, next, changes: upTo };
		return ok(body, { media: q.media, changeId });
	}
	return ok({ items: items.map(({ view }) => view), next, changes: upTo }, { changeId });
}

/** Both forms of a body as one; a feature's code may stand in its id. */
export function baysGiven(body: z.output<typeof baysIn>): BayIn[] | Problem {
	if (Array.isArray(body)) return body;
	const given: BayIn[] = [];
	const errors: { pointer: string; detail: string }[] = [];
	for (const [i, f] of body.features.entries()) {
		const code = codeShape.safeParse(f.properties.code ?? String(f.id ?? ''));
		const zone = codeShape.safeParse(f.properties.zone);
		if (!code.success)
			errors.push({ pointer: `#/features/${i}/properties/code`, detail: 'must be a code' });
		if (!zone.success)
			errors.push({ pointer: `#/features/${i}/properties/zone`, detail: 'must be a code' });
		if (code.success && zone.success) {
			const { personal } = f.properties;
			given.push({ code: code.data, zone: zone.data, geometry: f.geometry, personal });
		}
	}
	return errors.length === 0
		? given
		: problem(400, 'The body is not as described: see errors.', { errors: errors.slice(0, 20) });
}

export const geometryText = (g: BayIn['geometry']): string | null =>
	g == null ? null : JSON.stringify(normalPolygon(g));

/** All or nothing. */
export async function addBays(
	tx: Tx,
	siteId: number,
	given: readonly BayIn[],
	nowMs: number
): Promise<{ changes: number } | Problem> {
	const codes = given.map((b) => b.code);
	const first = new Map(codes.map((code, i) => [code, i] as const).reverse());
	const twice = codes.find((code, i) => first.get(code) !== i);
	if (twice !== undefined) return problem(409, `The code '${twice}' is given twice.`);
	const taken = await bays.byCodes(tx.db, siteId, codes);
	if (taken[0] !== undefined) return problem(409, `There is a bay '${taken[0].code}' already.`);
	const zones = new Map<string, number>();
	for (const { zone } of given) {
		if (!zones.has(zone)) zones.set(zone, await sites.ensureZone(tx.db, siteId, zone));
	}
	const ids = await bays.create(
		tx.db,
		given.map((b) => ({
			siteId,
			zoneId: zones.get(b.zone) ?? 0,
			code: b.code,
			geometry: geometryText(b.geometry),
			personal: b.personal ?? false
		})),
		nowMs
	);
	const rows = ids.map((bayId) => ({ kind: 'geometry' as const, bayId, nodeId: null }));
	return { changes: await changes.append(tx.sql, siteId, rows, nowMs) };
}
