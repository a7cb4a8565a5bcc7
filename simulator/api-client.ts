import { bayPolygon, type SitePlan } from './site-plan';

export interface Api {
	baseUrl: string;
	key: string;
}

/** An answer that is no success, with the server's own words. */
export class ApiRefusal extends Error {
	constructor(
		readonly status: number,
		what: string,
		detail: string
	) {
		super(`${what}: ${status} ${detail}`);
	}
}

const READY_POLL_MS = 400;

async function call(api: Api, method: string, path: string, body?: unknown): Promise<unknown> {
	const answer = await fetch(`${api.baseUrl}/api/v1${path}`, {
		method,
		headers: {
			authorization: `Bearer ${api.key}`,
			...(body === undefined ? {} : { 'content-type': 'application/json' })
		},
		...(body === undefined ? {} : { body: JSON.stringify(body) })
	});
	const text = await answer.text();
	if (!answer.ok) throw new ApiRefusal(answer.status, `${method} ${path}`, text.slice(0, 400));
	return text === '' ? null : (JSON.parse(text) as unknown);
}

/** Waits until database, broker and pipeline are ready; false when told to stop first. */
export async function waitUntilReady(api: Api, stop: AbortSignal): Promise<boolean> {
	while (!stop.aborted) {
		try {
			const answer = await fetch(`${api.baseUrl}/readyz`, { signal: AbortSignal.timeout(2000) });
			if (answer.ok) return true;
		} catch {
			// Not listening yet; the launcher says so if it stays that way.
		}
		await new Promise((resolve) => setTimeout(resolve, READY_POLL_MS));
	}
	return false;
}

async function exists(api: Api, path: string): Promise<boolean> {
	try {
		await call(api, 'GET', path);
		return true;
	} catch (error) {
		if (error instanceof ApiRefusal && error.status === 404) return false;
		throw error;
	}
}

export const siteExists = async (api: Api, slug: string): Promise<boolean> =>
	await exists(api, `/sites/${slug}`);

/** Whether somebody took the demo away: the site is not there, or the key is ended. */
export async function siteIsGone(api: Api, slug: string): Promise<boolean> {
	try {
		return !(await siteExists(api, slug));
	} catch (error) {
		// Anything else (the app restarts) says nothing of the site.
		return error instanceof ApiRefusal && error.status === 401;
	}
}

export async function createSite(api: Api, plan: SitePlan): Promise<void> {
	const { slug, name, latDeg, lonDeg, altitudeM, timezone } = plan;
	await call(api, 'POST', '/sites', { slug, name, lat: latDeg, lon: lonDeg, altitudeM, timezone });
}

interface Listed {
	items: Record<string, unknown>[];
}

async function listed(api: Api, path: string, name: string): Promise<Set<string>> {
	const { items } = (await call(api, 'GET', `${path}?limit=1000`)) as Listed;
	return new Set(items.map((item) => String(item[name])));
}

/** Bays that are not there yet; all or nothing. */
export async function createBays(api: Api, plan: SitePlan): Promise<void> {
	const there = await listed(api, `/sites/${plan.slug}/bays`, 'code');
	const bays = plan.bays
		.filter(({ code }) => !there.has(code))
		.map((bay) => ({ code: bay.code, zone: bay.zone, geometry: bayPolygon(plan, bay) }));
	if (bays.length > 0) await call(api, 'POST', `/sites/${plan.slug}/bays`, bays);
}

const serialPath = (serial: string): string => `/nodes/${encodeURIComponent(serial)}`;

/** Registers nodes that are not there yet; those that are get the key that we hold. */
export async function createNodes(
	api: Api,
	plan: SitePlan,
	keyHexOf: (serial: string) => string,
	heldKeys: 'known' | 'new'
): Promise<void> {
	const there = await listed(api, `/sites/${plan.slug}/nodes`, 'serial');
	const nodes = plan.nodes.filter(({ serial }) => !there.has(serial));
	if (nodes.length > 0) {
		await call(
			api,
			'POST',
			`/sites/${plan.slug}/nodes`,
			nodes.map(({ serial, profileCode }) => ({
				serial,
				profile: profileCode,
				key: keyHexOf(serial),
				gateway: 'gate-1',
				preCommissioned: true
			}))
		);
	}
	if (heldKeys === 'known') return;
	for (const serial of there)
		await call(api, 'POST', `${serialPath(serial)}/key`, { key: keyHexOf(serial) });
}

/** Puts every node that lies nowhere into its bay, since a time. */
export async function placeNodes(api: Api, plan: SitePlan, sinceMs: number): Promise<void> {
	const { items } = (await call(api, 'GET', `/sites/${plan.slug}/nodes?limit=1000`)) as Listed;
	const placed = new Set(items.filter(({ bay }) => bay !== null).map(({ serial }) => serial));
	const waiting = plan.nodes.filter(({ serial }) => !placed.has(serial));
	const at = new Date(sinceMs).toISOString();
	await Promise.all(
		waiting.map(async ({ serial, bayIndex }) => {
			await call(api, 'POST', `${serialPath(serial)}/place`, {
				bay: plan.bays[bayIndex]!.code,
				at
			});
		})
	);
}
