import type { RequestEvent, RequestHandler } from '@sveltejs/kit';
import type { z } from 'zod';
import type { RouteSpec } from '$lib/schemas/v1/spec';
import type { Reach } from '$lib/server/auth/reach';
import type { NodeRow } from '$lib/server/store/queries/nodes';
import type { SiteRow } from '$lib/server/store/queries/sites';
import type { Tx } from '$lib/server/store/transaction';
import { admit } from './admit';
import type { Answer } from './answer';
import { isDatabaseAway } from './database-away';
import {
	AnsweredBefore,
	idempotencyKey,
	keep,
	replay,
	requestHash,
	write,
	type Named
} from './idempotency';
import { instance, type Instance } from './instance';
import { findNode, findSite } from './locate';
import { mediaFor, type Media } from './negotiate';
import { invalidBody, invalidQuery, isProblem, problem, type Problem } from './problem';
import { readBody } from './read-body';
import { respond, unchanged, type Place } from './respond';

type Output<S, K extends 'query' | 'body'> = S extends { readonly [P in K]: infer T }
	? T extends z.ZodType
		? z.output<T>
		: undefined
	: undefined;

/** What a handler gets: everything is checked. */
export interface Ctx<S extends RouteSpec> {
	readonly app: Instance;
	readonly event: RequestEvent;
	readonly reach: Reach;
	readonly nowMs: number;
	readonly query: Output<S, 'query'>;
	readonly body: Output<S, 'body'>;
	readonly media: Media;
	/** One transaction; a returned Problem rolls it back. Remembers the answer for Idempotency-Key. */
	readonly write: <T extends Answer | Problem>(work: (tx: Tx) => Promise<T>) => Promise<T>;
}
export type SiteCtx<S extends RouteSpec> = Ctx<S> & { readonly site: SiteRow };
export type NodeCtx<S extends RouteSpec> = SiteCtx<S> & { readonly node: NodeRow };

type Handled = Promise<Answer | Problem>;
/** A handler with the rule it is checked by, for the route-table test and openapi.json. */
export type Route = RequestHandler & { readonly rule: RouteSpec };

interface Located {
	site: SiteRow | null;
	node: NodeRow | null;
}
type Locate = (app: Instance, event: RequestEvent, reach: Reach) => Promise<Located | Problem>;

/** A route that is of no one site. */
export function route<const S extends RouteSpec>(
	rule: S,
	handler: (ctx: Ctx<S>) => Handled
): Route {
	const nowhere = async () => ({ site: null, node: null });
	return withRule(rule, async (event) => await serve(event, rule, nowhere, handler));
}

/** A route below `[site]`; a site out of reach is answered as one that is not there. */
export function siteRoute<const S extends RouteSpec>(
	rule: S,
	handler: (ctx: SiteCtx<S>) => Handled
): Route {
	const run = (ctx: Ctx<S>) => handler(ctx as SiteCtx<S>);
	return withRule(rule, async (event) => await serve(event, rule, findSite, run));
}

/** A route below `nodes/[serial]`; a node of a site out of reach is answered as one not there. */
export function nodeRoute<const S extends RouteSpec>(
	rule: S,
	handler: (ctx: NodeCtx<S>) => Handled
): Route {
	const run = (ctx: Ctx<S>) => handler(ctx as NodeCtx<S>);
	return withRule(rule, async (event) => await serve(event, rule, findNode, run));
}

const withRule = (rule: RouteSpec, handler: RequestHandler): Route =>
	Object.assign(handler, { rule });

async function serve<S extends RouteSpec>(
	event: RequestEvent,
	rule: S,
	locate: Locate,
	handler: (ctx: Ctx<S>) => Handled
): Promise<Response> {
	const app = instance();
	const nowMs = Date.now();
	const place: Place = { app, event, rule, nowMs, fields: {}, site: null, reach: null };
	try {
		const admission = await admit(app, event, rule, nowMs);
		place.fields = admission.fields;
		if (!admission.ok) return await respond(place, admission.problem);
		place.reach = admission.reach;
		return await respondTo(place, locate, handler, admission.reach);
	} catch (error) {
		if (error instanceof AnsweredBefore) return await respond(place, error.answer);
		if (!isDatabaseAway(error)) throw error;
		const away = 'The database is away; nothing was done. Try again.';
		return await respond(place, problem(503, away, { headers: { 'retry-after': '5' } }));
	}
}

async function respondTo<S extends RouteSpec>(
	place: Place,
	locate: Locate,
	handler: (ctx: Ctx<S>) => Handled,
	reach: Reach
): Promise<Response> {
	const { app, event, rule, nowMs } = place;
	const located = await locate(app, event, reach);
	if (isProblem(located)) return await respond(place, located);
	place.site = located.site;
	const query = checkQuery(rule, event.url.searchParams);
	if (isProblem(query)) return await respond(place, query);
	const media: Media =
		rule.geojson === true && isRead(event)
			? mediaFor(event.request.headers.get('accept'))
			: 'application/json';
	const early = await unchanged(place, media);
	if (early !== null) return early;
	const body = await checkBody(rule, event.request);
	if (isProblem(body)) return await respond(place, body);
	const named = nameOf(event, reach, body.bytes);
	if (isProblem(named)) return await respond(place, named);
	if (named !== null) {
		const before = await replay(app, named, nowMs);
		if (before !== null) return await respond(place, before);
	}
	let wrote = false;
	const ctx = {
		...located,
		...{ app, event, reach, nowMs, media },
		query: query.value,
		body: body.value,
		write: async <T extends Answer | Problem>(work: (tx: Tx) => Promise<T>) => {
			wrote = true;
			return await write(app, named, work, nowMs);
		}
	} as unknown as Ctx<S>;
	const answer = await handler(ctx);
	if (wrote && named !== null && !isProblem(answer)) await keep(app, named, answer);
	return await respond(place, answer);
}

const isRead = (event: RequestEvent): boolean =>
	event.request.method === 'GET' || event.request.method === 'HEAD';

function checkQuery(rule: RouteSpec, params: URLSearchParams): { value: unknown } | Problem {
	const given: Record<string, string> = {};
	for (const [name, value] of params) {
		if (Object.hasOwn(given, name)) return problem(400, `Query: ${name} is given twice.`);
		Object.defineProperty(given, name, { value, enumerable: true });
	}
	if (rule.query === undefined) {
		const [first] = Object.keys(given);
		return first === undefined
			? { value: undefined }
			: problem(400, `Query: ${first}: is not known here.`);
	}
	const checked = rule.query.safeParse(given);
	return checked.success ? { value: checked.data } : invalidQuery(checked.error);
}

async function checkBody(
	rule: RouteSpec,
	request: Request
): Promise<{ value: unknown; bytes: Buffer } | Problem> {
	if (rule.body === undefined || rule.body === null) {
		return { value: undefined, bytes: Buffer.alloc(0) };
	}
	const read = await readBody(request, {
		geojson: rule.geojson === true,
		optional: rule.bodyOptional === true
	});
	if (!read.ok) return read.problem;
	const checked = rule.body.safeParse(read.value);
	if (!checked.success) return invalidBody(checked.error);
	return { value: checked.data, bytes: read.bytes };
}

function nameOf(event: RequestEvent, reach: Reach, body: Buffer): Named | Problem | null {
	if (isRead(event)) return null;
	const key = idempotencyKey(event.request.headers.get('idempotency-key'));
	if (key === null || isProblem(key)) return key;
	const hash = requestHash(event.request.method, event.url, body);
	return { actor: reach.actor, key, requestHash: hash };
}
