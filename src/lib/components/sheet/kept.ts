import type { BayItem, BayOutline } from '$lib/components/plan/types';

/**
 * What this browser keeps of a person's sheets for opening without a connection: the last plan, and
 * nothing else. It lies in the browser's cache storage under the person's own name and goes at sign-out,
 * on a 401 and when another person or role comes; after 72 h without an answer it is locked for good.
 */
export const KEPT_PREFIX = 'lodekeep-kept-';
export const LOCK_AFTER_MS = 72 * 3_600_000;
/** A clock set back by more than this is no sign of a recent contact. */
const CLOCK_SLACK_MS = 300_000;

export interface Keeper {
	id: number;
	role: string;
}
export interface KeptPlan {
	site: { slug: string; name: string; timezone: string; demo: boolean };
	zones: { code: string; name: string }[];
	outlines: BayOutline[];
	bays: BayItem[];
	/** When a node of the site was last heard. */
	asOfMs: number | null;
	keptAtMs: number;
}
export type Opened =
	| { state: 'none' }
	| { state: 'locked'; contactAtMs: number }
	| { state: 'plan'; plan: KeptPlan; contactAtMs: number };

/** Only secure pages (https, or loopback) have a cache storage. */
const storage = (): CacheStorage | null => ('caches' in globalThis ? globalThis.caches : null);

const nameOf = (keeper: Keeper) => `${KEPT_PREFIX}${keeper.id}-${keeper.role}`;
const KEYS = { contact: '/kept/contact', plan: '/kept/plan' } as const;

const read = async <T>(cache: Cache, key: string): Promise<T | null> => {
	const found = await cache.match(key);
	return found === undefined ? null : ((await found.json()) as T);
};
const write = async (cache: Cache, key: string, value: unknown): Promise<void> => {
	await cache.put(key, Response.json(value));
};

/** Takes out what is another person's or another role's, and marks the contact. */
export async function claim(keeper: Keeper, nowMs: number): Promise<void> {
	const caches = storage();
	if (caches === null) return;
	const own = nameOf(keeper);
	wiped.delete(own);
	for (const name of await caches.keys())
		if (name.startsWith(KEPT_PREFIX) && name !== own) await caches.delete(name);
	await write(await caches.open(own), KEYS.contact, nowMs);
}

/** Kept only under a claim that still stands: after a wipe nothing comes back by itself. */
export async function keepPlan(keeper: Keeper, plan: KeptPlan): Promise<void> {
	const caches = storage();
	const name = nameOf(keeper);
	if (caches === null || !(await caches.has(name))) return;
	const cache = await caches.open(name);
	await write(cache, KEYS.plan, plan);
	await write(cache, KEYS.contact, plan.keptAtMs);
	// The claim may have been wiped while this was written.
	if (wiped.has(name)) await caches.delete(name);
}

/** Names taken out since they were last claimed, on this page. */
const wiped = new Set<string>();

/** Takes everything out. */
export async function wipe(): Promise<void> {
	const caches = storage();
	if (caches === null) return;
	for (const name of await caches.keys()) {
		if (!name.startsWith(KEPT_PREFIX)) continue;
		wiped.add(name);
		await caches.delete(name);
	}
}

/** Whether what is kept is locked: 72 h without an answer, or a clock set back behind the last one. */
export const isLocked = (contactAtMs: number, nowMs: number): boolean =>
	nowMs - contactAtMs > LOCK_AFTER_MS || nowMs < contactAtMs - CLOCK_SLACK_MS;

/** What can be shown without a connection. A locked plan is taken out, so no clock brings it back. */
export async function openKept(nowMs: number): Promise<Opened> {
	const caches = storage();
	const name = (await caches?.keys())?.find((one) => one.startsWith(KEPT_PREFIX));
	if (caches === null || name === undefined) return { state: 'none' };
	const cache = await caches.open(name);
	const contactAtMs = (await read<number>(cache, KEYS.contact)) ?? 0;
	if (isLocked(contactAtMs, nowMs)) {
		await cache.delete(KEYS.plan);
		return { state: 'locked', contactAtMs };
	}
	const plan = await read<KeptPlan>(cache, KEYS.plan);
	return plan === null ? { state: 'none' } : { state: 'plan', plan, contactAtMs };
}
