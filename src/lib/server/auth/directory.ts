import { isScope, SCOPES_OF_ROLE, type Scope } from '$lib/schemas/roles';
import type { ReachRows } from '$lib/server/store/queries/people';
import { hashSecret, parseKey, sameHash } from './api-key';
import type { Reach } from './reach';

/** A change made by another process is seen within this; with a request's own time it stays under 1 s. */
export const MAX_AGE_MS = 500;

export interface KeyFound {
	reach: Reach;
	origins: ReadonlySet<string>;
	expiresAtMs: number | null;
}

export interface Directory {
	/** null when switched off, or when the session's version is another. */
	person(id: number, sessionVersion: number): Reach | null;
	/** null when not known, revoked or expired. */
	key(text: string, nowMs: number): KeyFound | null;
	/** Of all living keys, for preflights. */
	readonly origins: ReadonlySet<string>;
}

const words = (text: string | null): string[] => (text ?? '').split(' ').filter((w) => w !== '');

function sitesOf(all: boolean, ids: number[] | undefined): Reach['sites'] {
	return all ? 'all' : new Set(ids ?? []);
}

function grouped<T>(rows: readonly T[], key: (row: T) => number, value: (row: T) => number) {
	const map = new Map<number, number[]>();
	for (const row of rows) map.set(key(row), [...(map.get(key(row)) ?? []), value(row)]);
	return map;
}

function peopleOf(rows: ReachRows) {
	const sites = grouped(
		rows.personSites,
		(r) => r.personId,
		(r) => r.siteId
	);
	return new Map(
		rows.people.map((p) => {
			const reach: Reach = {
				actor: `person:${p.id}`,
				role: p.role,
				scopes: new Set(SCOPES_OF_ROLE[p.role]),
				sites: sitesOf(p.allSites, sites.get(p.id)),
				personalAllowed: true,
				name: p.name,
				mustChangePassword: p.mustChangePassword
			};
			return [p.id, { version: p.sessionVersion, reach }] as const;
		})
	);
}

function keysOf(rows: ReachRows) {
	const sites = grouped(
		rows.keySites,
		(r) => r.keyId,
		(r) => r.siteId
	);
	return new Map(
		rows.keys.map((k) => {
			const reach: Reach = {
				actor: `key:${k.id}`,
				role: null,
				scopes: new Set(words(k.scopes).filter((s): s is Scope => isScope(s))),
				sites: sitesOf(k.allSites, sites.get(k.id)),
				personalAllowed: k.personalAllowed,
				name: k.name,
				mustChangePassword: false
			};
			const found: KeyFound = {
				reach,
				origins: new Set(words(k.origins)),
				expiresAtMs: k.expiresAtMs
			};
			return [k.publicId, { hash: k.secretHash, found }] as const;
		})
	);
}

export function buildDirectory(rows: ReachRows): Directory {
	const people = peopleOf(rows);
	const keys = keysOf(rows);
	return {
		person: (id, version) => {
			const known = people.get(id);
			return known !== undefined && known.version === version ? known.reach : null;
		},
		key: (text, nowMs) => {
			const parts = parseKey(text);
			const known = parts === null ? undefined : keys.get(parts.publicId);
			if (parts === null || known === undefined) return null;
			if (!sameHash(hashSecret(parts.secret), known.hash)) return null;
			const { expiresAtMs } = known.found;
			return expiresAtMs !== null && expiresAtMs <= nowMs ? null : known.found;
		},
		origins: new Set([...keys.values()].flatMap(({ found }) => [...found.origins]))
	};
}

/**
 * The directory in memory, read again when older than MAX_AGE_MS and somebody asks. While the
 * database is away the last one stands: nothing can be changed or read then anyway.
 */
export class LiveDirectory {
	#current: Directory | null = null;
	#readAtMs = 0;
	#reading: Promise<Directory> | null = null;
	#generation = 0;

	constructor(
		private readonly read: () => Promise<ReachRows>,
		private readonly now: () => number = Date.now
	) {}

	/** At most MAX_AGE_MS old. Throws only when the database is away and there is none yet. */
	async get(): Promise<Directory> {
		if (this.#current !== null && this.now() - this.#readAtMs < MAX_AGE_MS) return this.#current;
		this.#reading ??= this.#reload(this.#generation);
		return await this.#reading;
	}

	/** After a change made here: the next request reads anew. */
	invalidate(): void {
		// A reading under way may have begun before the change: whoever asks from now on reads anew.
		this.#generation++;
		this.#readAtMs = 0;
		this.#reading = null;
	}

	async #reload(generation: number): Promise<Directory> {
		const startedMs = this.now();
		let directory: Directory;
		try {
			directory = buildDirectory(await this.read());
		} catch (error) {
			if (this.#current === null) throw error;
			directory = this.#current;
		} finally {
			if (generation === this.#generation) this.#reading = null;
		}
		if (generation === this.#generation) {
			this.#current = directory;
			this.#readAtMs = startedMs;
		}
		return directory;
	}
}
