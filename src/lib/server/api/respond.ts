import { createHash } from 'node:crypto';
import type { RequestEvent } from '@sveltejs/kit';
import type { RouteSpec } from '$lib/schemas/v1/spec';
import { reachStamp, type Reach } from '$lib/server/auth/reach';
import type { SiteRow } from '$lib/server/store/queries/sites';
import type { Answer } from './answer';
import { compress, MIN_CODED_BYTES } from './compress';
import { etagOf, noneMatch } from './etag';
import type { Instance } from './instance';
import { siteLive } from './live';
import { codingFor, type Coding, type Media } from './negotiate';
import { isProblem, problemResponse, type Problem } from './problem';
import { rfc3339 } from './time';

const VARY = 'Accept, Accept-Encoding, Authorization, Cookie';

/** Where an answer goes: filled in as the checks go along. */
export interface Place {
	readonly app: Instance;
	readonly event: RequestEvent;
	readonly rule: RouteSpec;
	readonly nowMs: number;
	/** RateLimit and CORS: on every answer. */
	fields: Record<string, string>;
	site: SiteRow | null;
	reach: Reach | null;
}

const isRead = (place: Place): boolean =>
	place.event.request.method === 'GET' || place.event.request.method === 'HEAD';

const codingOf = (place: Place): Coding =>
	codingFor(place.event.request.headers.get('accept-encoding'));

/** Below a site every 200 and 304 says how fresh the site is, apart from whether it changed. */
async function asOf(place: Place): Promise<Record<string, string>> {
	const { app, site, nowMs } = place;
	if (site === null || place.event.params['site'] === undefined) return {};
	return { 'site-as-of': rfc3339((await siteLive(app, site, nowMs)).asOfMs) };
}

const vary = (place: Place): string =>
	place.event.request.headers.has('origin') ? `${VARY}, Origin` : VARY;

async function commonFields(place: Place): Promise<Record<string, string>> {
	return {
		...place.fields,
		...(await asOf(place)),
		'cache-control': 'private, no-cache',
		vary: vary(place)
	};
}

const HOUR_MS = 3_600_000;

/**
 * What the ETag of a site's list is made of besides media type and coding. What is told of personal
 * bays also goes with time (24 h): to those who may see it nothing is unchanged for over an hour.
 */
function siteParts(place: Place, site: SiteRow, reach: Reach, changeId: number) {
	const hour = reach.personalAllowed ? Math.floor(place.nowMs / HOUR_MS) : 0;
	return [site.id, changeId, site.firstChange, reachStamp(reach), hour];
}

/** The key of a coded answer: one URL, one tag. */
const cacheKey = (place: Place, etag: string): string =>
	`${place.event.url.pathname}${place.event.url.search} ${etag}`;

/**
 * For routes stamped by the site's change id: 304 or a coded answer from memory, by the row of the
 * site alone. null = the handler must read.
 */
export async function unchanged(place: Place, media: Media): Promise<Response | null> {
	const { rule, site, reach, app } = place;
	if (rule.stamp !== 'change' || site === null || reach === null || !isRead(place)) return null;
	const parts = siteParts(place, site, reach, site.lastChange);
	const header = place.event.request.headers.get('if-none-match');
	const coding = codingOf(place);
	for (const tried of new Set<Coding>([coding, 'identity'])) {
		const etag = etagOf(parts, media, tried);
		if (!noneMatch(header, etag)) {
			return new Response(null, { status: 304, headers: { ...(await commonFields(place)), etag } });
		}
		const kept = app.coded.get(cacheKey(place, etag));
		// A short answer goes uncoded whatever is accepted; a long one only to who accepts no coding.
		if (kept !== undefined && (tried === coding || kept.length < MIN_CODED_BYTES)) {
			return bytesResponse(kept, 200, {
				...(await commonFields(place)),
				'content-type': media,
				...(tried === 'identity' ? {} : { 'content-encoding': tried }),
				etag
			});
		}
	}
	return null;
}

function bytesResponse(bytes: Buffer, status: number, headers: Record<string, string>): Response {
	const body = new Uint8Array(bytes.buffer as ArrayBuffer, bytes.byteOffset, bytes.length);
	return new Response(body, {
		status,
		headers: { ...headers, 'content-length': String(bytes.length) }
	});
}

export async function respond(place: Place, answer: Answer | Problem): Promise<Response> {
	if (isProblem(answer)) {
		return problemResponse({ ...answer, headers: { ...answer.headers, ...place.fields } });
	}
	if (answer.body === undefined) {
		return new Response(null, {
			status: answer.status,
			headers: { ...place.fields, ...answer.headers, 'cache-control': 'no-store' }
		});
	}
	if (Buffer.isBuffer(answer.body)) {
		return bytesResponse(answer.body, answer.status, {
			...place.fields,
			...answer.headers,
			'cache-control': 'private, no-store',
			'content-disposition': 'inline',
			vary: vary(place)
		});
	}
	const plain = Buffer.from(JSON.stringify(answer.body));
	return isRead(place) && !answer.secret
		? await read(place, answer, plain)
		: await written(place, answer, plain);
}

/** Answers to writes are never kept by a cache; those that show a key are not compressed either. */
async function written(place: Place, answer: Answer, plain: Buffer): Promise<Response> {
	const coding = plain.length < MIN_CODED_BYTES || answer.secret ? 'identity' : codingOf(place);
	return bytesResponse(await compress(plain, coding), answer.status, {
		...place.fields,
		...answer.headers,
		'cache-control': 'no-store',
		vary: vary(place),
		'content-type': answer.media,
		...(coding === 'identity' ? {} : { 'content-encoding': coding })
	});
}

async function read(place: Place, answer: Answer, plain: Buffer): Promise<Response> {
	const { app, site, reach, rule } = place;
	const coding = plain.length < MIN_CODED_BYTES ? 'identity' : codingOf(place);
	const common = await commonFields(place);
	const fields = { ...common, ...answer.headers, 'content-type': answer.media };
	if (rule.stamp === 'none') {
		return bytesResponse(await compress(plain, coding), answer.status, {
			...fields,
			...(coding === 'identity' ? {} : { 'content-encoding': coding })
		});
	}
	const stamped = answer.changeId !== null && site !== null && reach !== null;
	const parts = stamped
		? siteParts(place, site, reach, answer.changeId ?? 0)
		: [createHash('sha256').update(plain).digest('hex')];
	const etag = etagOf(parts, answer.media, coding);
	if (!noneMatch(place.event.request.headers.get('if-none-match'), etag)) {
		return new Response(null, { status: 304, headers: { ...common, etag } });
	}
	const key = cacheKey(place, etag);
	const kept = stamped ? app.coded.get(key) : undefined;
	const bytes = kept ?? (await compress(plain, coding));
	if (stamped && kept === undefined) app.coded.set(key, bytes);
	return bytesResponse(bytes, answer.status, {
		...fields,
		...(coding === 'identity' ? {} : { 'content-encoding': coding }),
		etag
	});
}
