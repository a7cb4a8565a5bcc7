import { randomUUID } from 'node:crypto';
import { SvelteKitAuth } from '@auth/sveltekit';
import { redirect, type Handle, type HandleServerError, type ServerInit } from '@sveltejs/kit';
import { errorWords } from '$lib/format/messages/error';
import { building } from '$app/environment';
import { preflight } from '$lib/server/api/cors';
import { isDatabaseAway } from '$lib/server/api/database-away';
import { canonical, detour, dueForRenewal } from '$lib/server/api/guard';
import { mutable, secure } from '$lib/server/api/headers';
import { closeInstance, instance, startInstance, type Instance } from '$lib/server/api/instance';
import { observe } from '$lib/server/api/metrics';
import { problem, problemResponse } from '$lib/server/api/problem';
import { asProblem, noRoute } from '$lib/server/api/refusals';
import { authConfig } from '$lib/server/auth/authjs';
import { identify, isProgram, NOBODY, type Caller } from '$lib/server/auth/identify';
import { languageOf, speaking } from '$lib/server/auth/language';
import { forgedRequest, isOneClick } from '$lib/server/auth/origin';
import { cookieOptions, SESSION_MAX_AGE_S } from '$lib/server/auth/session';

export const init: ServerInit = async () => {
	if (building) return;
	await startInstance();
};

/** Under the launcher's patience: whatever still hangs then ends with the process. */
const CLOSE_MS = 10_000;

/** adapter-node says so after the last answer has gone out. */
async function shutDown(): Promise<void> {
	const late = new Promise((resolve) => setTimeout(resolve, CLOSE_MS).unref());
	await Promise.race([closeInstance(), late]);
	process.exit(0);
}
if (!building) {
	process.removeAllListeners('sveltekit:shutdown');
	process.on('sveltekit:shutdown', () => void shutDown());
}

type Event = Parameters<Handle>[0]['event'];
type Resolve = Parameters<Handle>[0]['resolve'];

/** Only its callback and sign-out are ever reached: all its pages are ours, or not there. */
const authJs = SvelteKitAuth(async (event) => authConfig(instance(), event));
const AUTH_ROUTES = new Set(['/auth/callback/credentials', '/auth/signout']);

const isApi = (pathname: string): boolean => pathname === '/api' || pathname.startsWith('/api/');

export const handle: Handle = async ({ event, resolve }) => {
	event.locals.reach = null;
	event.locals.key = null;
	if (building) return await resolve(event);
	const startedMs = performance.now();
	const app = instance();
	const response = mutable(await answer(app, event, resolve));
	secure(response, {
		isApi: isApi(event.url.pathname),
		https: event.url.protocol === 'https:'
	});
	observe(event, response.status, performance.now() - startedMs);
	return response;
};

async function answer(app: Instance, event: Event, resolve: Resolve): Promise<Response> {
	const { request, url } = event;
	const api = isApi(url.pathname);
	const elsewhere = canonical(event, app.config.origin);
	if (elsewhere !== null)
		return new Response(null, { status: 307, headers: { location: elsewhere } });
	const authorization = request.headers.get('authorization');
	const forged = forgedRequest({
		method: request.method,
		origin: request.headers.get('origin'),
		ours: app.config.origin ?? url.origin,
		hasSession: event.cookies.get(app.sessions.cookieName) !== undefined,
		program: isProgram(url.pathname, authorization) || isOneClick(url.pathname)
	});
	if (forged) return refuse(api, 403, 'This request came from another site, or from none.');
	if (url.pathname.startsWith('/api/v1') && request.method === 'OPTIONS') {
		return preflight(request.headers.get('origin'), await originsOfKeys(app));
	}
	// Without the framework: it would draw a page of refusal first.
	if (api && event.route.id === null) return noRoute(url.pathname);
	if (url.pathname.startsWith('/auth/')) return await authRoute(event);
	const caller = await callerOf(app, event, authorization);
	if (caller === null) return refuse(api, 503, 'The database is away. Try again.');
	event.locals.reach = caller.reach;
	event.locals.key = caller.key;
	return api ? await asProblem(await resolve(event)) : await page(app, event, resolve, caller);
}

async function page(
	app: Instance,
	event: Event,
	resolve: Resolve,
	caller: Caller
): Promise<Response> {
	const first = detour(event, caller);
	if (first !== null) redirect(303, first);
	if (caller.session !== null && dueForRenewal(event, caller, Date.now())) {
		const { personId, version } = caller.session;
		event.cookies.set(app.sessions.cookieName, await app.sessions.issue(personId, version), {
			...cookieOptions(app.secureCookies),
			maxAge: SESSION_MAX_AGE_S
		});
	}
	const language = languageOf(event);
	return await speaking(
		language,
		async () =>
			await resolve(event, {
				transformPageChunk: ({ html }) => html.replace('%lodekeep.language%', language)
			})
	);
}

async function authRoute(event: Event): Promise<Response> {
	const known = AUTH_ROUTES.has(event.url.pathname) && event.request.method === 'POST';
	if (!known) return new Response('Not found', { status: 404 });
	return await authJs.handle({ event, resolve: () => new Response('Not found', { status: 404 }) });
}

/** null = cannot be told now. A request that shows nothing needs no database. */
async function callerOf(
	app: Instance,
	event: Event,
	authorization: string | null
): Promise<Caller | null> {
	try {
		const { pathname } = event.url;
		return await identify(app, { pathname, authorization, cookies: event.cookies }, Date.now());
	} catch (error) {
		if (isDatabaseAway(error)) return isProbe(event.url.pathname) ? NOBODY : null;
		throw error;
	}
}

const isProbe = (pathname: string): boolean => /^\/(healthz|readyz|metrics)$/.test(pathname);

async function originsOfKeys(app: Instance): Promise<ReadonlySet<string>> {
	return await app.directory.get().then(
		(directory) => directory.origins,
		() => new Set<string>()
	);
}

function refuse(api: boolean, status: number, detail: string): Response {
	const headers: Record<string, string> = status === 503 ? { 'retry-after': '5' } : {};
	if (api) return problemResponse(problem(status, detail, { headers }));
	return new Response(detail, {
		status,
		headers: {
			...headers,
			'content-type': 'text/plain; charset=utf-8',
			'cache-control': 'no-store'
		}
	});
}

export const handleError: HandleServerError = ({ error, event, status, message }) => {
	if (status < 500) return { message };
	const reference = randomUUID().slice(0, 8);
	// Path and stack only: query strings, bodies and headers may hold secrets.
	const stack = error instanceof Error ? error.stack : String(error);
	// The path of a wall link is its secret.
	const path = event.url.pathname.replace(/^\/wall\/[^/]+/, '/wall/…');
	if (!building) instance().log.error({ reference, path, stack }, 'unexpected');
	return { message: errorWords().broke, reference };
};
