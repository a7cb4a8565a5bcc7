import { z } from 'zod';
import { created, ok, type Answer } from '$lib/server/api/answer';
import { badCursor } from '$lib/server/api/bays';
import { decodeCursor, encodeCursor } from '$lib/server/api/cursor';
import type { Instance } from '$lib/server/api/instance';
import { notHere } from '$lib/server/api/locate';
import { isProblem, problem, type Problem } from '$lib/server/api/problem';
import { reaches, type Reach } from '$lib/server/auth/reach';
import * as sites from '$lib/server/store/queries/sites';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as views from '$lib/server/store/queries/refresh-views';
import type { NamedRefresh } from '$lib/server/store/queries/refresh-views';
import type { RefreshState } from '$lib/server/store/queries/refreshes';
import type { Tx } from '$lib/server/store/transaction';
import { apply } from './apply';
import { ask, isDuplicate, NOT_ASKED } from './ask';
import type { NotTaken } from './course';
import { summaryOf, viewOf } from './views';

const idCursor = z.strictObject({ before: z.int() });

/** What a refused step is answered with. */
export function notTaken(reason: NotTaken, state: string): Problem {
	const said = state.replaceAll('_', ' ');
	return reason === 'own_request'
		? problem(403, 'Nobody approves their own request here: another person does.')
		: problem(409, `It is '${said}' by now: reload and look again.`);
}

/** One within reach; personal bays only for those who may see them. */
export async function find(
	sql: Sql,
	reach: Reach,
	id: string | undefined,
	siteId: number | null = null
): Promise<NamedRefresh | Problem> {
	const number = Number(id);
	const found = Number.isSafeInteger(number) && number > 0 ? await views.byId(sql, number) : null;
	if (found === null || !reaches(reach, found.siteId)) return notHere(reach);
	if (siteId !== null && found.siteId !== siteId) return notHere(reach);
	return found.personal && !reach.personalAllowed ? notHere(reach) : found;
}

export interface ListQuery {
	site?: string | undefined;
	state?: RefreshState | undefined;
	limit: number;
	cursor?: string | undefined;
}

export async function listRefreshes(
	app: Instance,
	reach: Reach,
	q: ListQuery
): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? null : decodeCursor(idCursor, q.cursor);
	if (q.cursor !== undefined && at === null) return badCursor();
	const site = q.site === undefined ? null : await sites.bySlug(app.store.db, q.site);
	if (q.site !== undefined && (site === null || !reaches(reach, site.id))) return notHere(reach);
	const all = reach.sites === 'all' ? ('all' as const) : [...reach.sites];
	const rows = await views.page(app.store.pool, {
		sites: site === null ? all : [site.id],
		personal: reach.personalAllowed,
		state: q.state ?? null,
		beforeId: at?.before ?? null,
		limit: q.limit + 1
	});
	const shown = rows.slice(0, q.limit);
	const last = shown.at(-1);
	const more = rows.length > q.limit && last !== undefined;
	return ok({ items: shown.map(summaryOf), next: more ? encodeCursor({ before: last.id }) : null });
}

export interface Asking {
	siteId: number;
	nodeId: number;
	reach: Reach;
	reason: string;
}

/** `asked`, by whoever it is: a key's order too waits for a person. */
export async function askOne({ sql }: Tx, a: Asking, nowMs: number): Promise<Answer | Problem> {
	const origin = a.reach.role === null ? 'key' : 'person';
	try {
		const { siteId, nodeId, reason } = a;
		const wanted = { siteId, nodeId, reason, origin, bulkId: null, by: a.reach.actor } as const;
		const asked = await ask(sql, wanted, nowMs);
		if (!asked.ok) {
			const status = asked.reason === 'open_already' ? 409 : 422;
			return problem(status, `Not asked: ${NOT_ASKED[asked.reason]}.`);
		}
		const row = await views.byId(sql, asked.id);
		if (row === null) return notHere(a.reach);
		return created(await viewOf(sql, row), `/api/v1/refreshes/${asked.id}`);
	} catch (error) {
		if (!isDuplicate(error)) throw error;
		return problem(409, `Not asked: ${NOT_ASKED.open_already}.`);
	}
}

/** Calls one off: an operator only what they asked for themselves and nobody has approved. */
export async function callOff(
	{ sql }: Tx,
	reach: Reach,
	id: string | undefined,
	why: string,
	nowMs: number
): Promise<Answer | Problem> {
	const found = await find(sql, reach, id);
	if (isProblem(found)) return found;
	const own = found.askedBy === reach.actor && found.state === 'asked';
	if (reach.role === 'operator' && !own)
		return problem(403, 'You may call off what you asked for, until it is approved.');
	const done = await apply(sql, found.id, {
		kind: 'call_off',
		by: reach.actor,
		why,
		atMs: nowMs
	});
	if (!done.ok) return notTaken(done.reason, done.row?.state ?? 'gone');
	const row = await views.byId(sql, found.id);
	return row === null ? notHere(reach) : ok(await viewOf(sql, row));
}
