import { expect, test } from 'vitest';
import type { ReachRows } from '$lib/server/store/queries/people';
import { hashSecret, keyText } from './api-key';
import { buildDirectory, LiveDirectory, MAX_AGE_MS } from './directory';

const T = 1_800_000_000_000;
const secret = 'ab'.repeat(32);
const publicId = '0123456789ab';

const rows = (over: { version?: number; expiresAtMs?: number | null } = {}): ReachRows => ({
	people: [
		{
			id: 1,
			name: 'Ona',
			role: 'operator',
			allSites: false,
			sessionVersion: over.version ?? 3,
			mustChangePassword: false
		}
	],
	personSites: [{ personId: 1, siteId: 7 }],
	keys: [
		{
			id: 5,
			publicId,
			secretHash: hashSecret(secret),
			name: 'map',
			scopes: 'occupancy nonsense',
			allSites: true,
			origins: 'https://map.example',
			personalAllowed: false,
			makerId: null,
			createdAtMs: T,
			expiresAtMs: over.expiresAtMs ?? null,
			revokedAtMs: null
		}
	],
	keySites: []
});

test('a person is known by id and version of the session', () => {
	const directory = buildDirectory(rows());
	expect(directory.person(1, 3)).toMatchObject({ role: 'operator', sites: new Set([7]) });
	expect(directory.person(1, 2)).toBeNull();
	expect(directory.person(2, 3)).toBeNull();
});

test('a key is known by its secret, until it ends; scopes that do not exist give nothing', () => {
	const text = keyText({ publicId, secret });
	const directory = buildDirectory(rows({ expiresAtMs: T + 1000 }));
	expect(directory.key(text, T)?.reach).toMatchObject({
		sites: 'all',
		scopes: new Set(['occupancy'])
	});
	expect(directory.key(text, T + 1000)).toBeNull();
	expect(directory.key(keyText({ publicId, secret: 'ac'.repeat(32) }), T)).toBeNull();
	expect(directory.origins).toEqual(new Set(['https://map.example']));
});

test('a change made elsewhere is seen within half a second', async () => {
	let nowMs = T;
	let version = 3;
	let reads = 0;
	const live = new LiveDirectory(
		async () => {
			reads++;
			return rows({ version });
		},
		() => nowMs
	);
	await Promise.all([live.get(), live.get()]);
	expect(reads).toBe(1);
	version = 4;
	nowMs += MAX_AGE_MS - 1;
	expect((await live.get()).person(1, 3)).not.toBeNull();
	nowMs += 1;
	expect((await live.get()).person(1, 3)).toBeNull();
});

test('a reading that began before a change made here is not kept', async () => {
	let version = 3;
	let finish: (() => void) | undefined;
	const live = new LiveDirectory(
		async () => {
			const before = rows({ version });
			if (version === 3) await new Promise<void>((go) => (finish = go));
			return before;
		},
		() => T
	);
	const first = live.get();
	version = 4;
	live.invalidate();
	finish?.();
	await first;
	expect((await live.get()).person(1, 4)).not.toBeNull();
});

test('while the database is away the last directory stands', async () => {
	let nowMs = T;
	let away = false;
	const live = new LiveDirectory(
		async () => {
			if (away) throw new Error('away');
			return rows();
		},
		() => nowMs
	);
	await live.get();
	away = true;
	nowMs += 10_000;
	expect((await live.get()).person(1, 3)).not.toBeNull();
});
