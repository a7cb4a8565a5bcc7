import type { BayItem, BayOutline } from '$lib/components/plan/types';
import type { WalkView } from '$lib/schemas/visit-view';

/**
 * What this browser keeps of a person's sheets for opening without a connection: the last plan, the walk at
 * hand with the keys that seal what is recorded in it, and nothing else. It lies in the browser's cache storage under the person's own name and goes at sign-out,
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
const KEYS = {
	contact: '/kept/contact',
	plan: '/kept/plan',
	walk: '/kept/walk',
	sealing: '/kept/sealing'
} as const;

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
	await keep(keeper, [
		[KEYS.plan, plan],
		[KEYS.contact, plan.keptAtMs]
	]);
}

/** The walk as the server last gave it, with the keys of this person (base64) for what they record in it. */
export async function keepWalk(
	keeper: Keeper,
	walk: WalkView,
	sealing: readonly string[],
	nowMs: number
): Promise<void> {
	await keep(keeper, [
		[KEYS.walk, walk],
		[KEYS.sealing, sealing],
		[KEYS.contact, nowMs]
	]);
}

/** A walk that is over is not opened any more. */
export async function dropWalk(keeper: Keeper): Promise<void> {
	const caches = storage();
	if (caches === null || !(await caches.has(nameOf(keeper)))) return;
	await (await caches.open(nameOf(keeper))).delete(KEYS.walk);
}

async function keep(keeper: Keeper, values: readonly (readonly [string, unknown])[]) {
	const caches = storage();
	const name = nameOf(keeper);
	if (caches === null || !(await caches.has(name))) return;
	const cache = await caches.open(name);
	for (const [key, value] of values) await write(cache, key, value);
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
		await lock(cache);
		return { state: 'locked', contactAtMs };
	}
	const plan = await read<KeptPlan>(cache, KEYS.plan);
	return plan === null ? { state: 'none' } : { state: 'plan', plan, contactAtMs };
}

export interface KeptWalk {
	walk: WalkView;
	sealing: string[];
	keeper: Keeper;
	contactAtMs: number;
}

/** The walk at hand without a connection; null when none is kept, or when it is locked. */
export async function openKeptWalk(nowMs: number): Promise<KeptWalk | null> {
	const caches = storage();
	const name = (await caches?.keys())?.find((one) => one.startsWith(KEPT_PREFIX));
	const [id, role] = name?.slice(KEPT_PREFIX.length).split('-') ?? [];
	if (caches === null || name === undefined || id === undefined || role === undefined) return null;
	const cache = await caches.open(name);
	const contactAtMs = (await read<number>(cache, KEYS.contact)) ?? 0;
	if (isLocked(contactAtMs, nowMs)) {
		await lock(cache);
		return null;
	}
	const walk = await read<WalkView>(cache, KEYS.walk);
	const sealing = (await read<string[]>(cache, KEYS.sealing)) ?? [];
	return walk === null ? null : { walk, sealing, keeper: { id: Number(id), role }, contactAtMs };
}

/** The contact stays, so that it can be said since when; recordings that wait stay sealed. */
async function lock(cache: Cache): Promise<void> {
	for (const key of [KEYS.plan, KEYS.walk, KEYS.sealing]) await cache.delete(key);
}
