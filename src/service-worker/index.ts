import { build, version } from '$service-worker';

/*
 * Opens the shell without a connection. It keeps the sheet /offline and the application's own files under
 * the version's name, and nothing that anybody's session was needed for: answers of /auth and /api pass by
 * untouched, and so do pages. The last plan is kept by the page itself ($lib/components/sheet/kept).
 */
const worker = globalThis as unknown as ServiceWorkerGlobalScope;
const SHELL = `lodekeep-shell-${version}`;
const SHEET = '/offline';

worker.addEventListener('install', (event) => {
	event.waitUntil(keepShell());
});
worker.addEventListener('activate', (event) => {
	event.waitUntil(takeOver());
});
worker.addEventListener('fetch', (event) => {
	const { request } = event;
	const url = new URL(request.url);
	if (request.method !== 'GET' || url.origin !== worker.location.origin) return;
	if (request.mode === 'navigate') event.respondWith(page(request, url));
	else if (url.pathname.startsWith('/_app/immutable/')) event.respondWith(file(request));
});

/** The sheet is asked for without a cookie: it is the same for everybody. */
async function keepShell(): Promise<void> {
	const sheet = await fetch(SHEET, { credentials: 'omit', redirect: 'error' });
	if (!sheet.ok) throw new Error(`The shell was answered with ${sheet.status}.`);
	const cache = await caches.open(SHELL);
	// Which files a sheet imports later is known to none but the bundle: all of them, about 250 kB packed.
	await cache.addAll([...build, '/favicon.svg']);
	await cache.put(SHEET, sheet);
	await worker.skipWaiting();
}

async function takeOver(): Promise<void> {
	const old = (await caches.keys()).filter(
		(name) => name.startsWith('lodekeep-shell-') && name !== SHELL
	);
	await Promise.all(old.map(async (name) => await caches.delete(name)));
	await worker.clients.claim();
}

/** A page as the server gives it; without an answer the kept sheet, which says so. */
async function page(request: Request, url: URL): Promise<Response> {
	try {
		return await fetch(request);
	} catch {
		const kept = await caches.match(SHEET, { ignoreSearch: true, ignoreVary: true });
		if (kept === undefined) return Response.error();
		if (url.pathname === SHEET) return kept;
		const from = encodeURIComponent(url.pathname + url.search);
		return Response.redirect(`${SHEET}?from=${from}`, 302);
	}
}

/** Files named by their content never change. */
async function file(request: Request): Promise<Response> {
	return (await caches.match(request, { ignoreVary: true })) ?? (await fetch(request));
}
