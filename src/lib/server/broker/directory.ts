import { createHash, timingSafeEqual } from 'node:crypto';
import type { NodeDirectoryEntry } from '$lib/server/ingest/subscriber-types';

export type Check =
	| { ok: true; hash: string }
	/** `unavailable`: nobody can say now, so the node is told to come again, not that it is unknown. */
	| { ok: false; reason: 'refused' | 'unavailable' };

const NOBODY = Buffer.alloc(32);
const sha256 = (bytes: Uint8Array): Buffer => createHash('sha256').update(bytes).digest();

/**
 * The nodes the broker knows, by SHA-256 of their MQTT password, in memory only. A password is an HMAC
 * of 256 bits, so a plain hash can't be searched. The app refreshes it: a full list in parts, then changes.
 */
export class NodeDirectory {
	#nodes = new Map<string, readonly Buffer[]>();
	#staging: Map<string, readonly Buffer[]> | null = null;
	#vouchedUntilMs = 0;

	constructor(private readonly vouchMs: number) {}

	get size(): number {
		return this.#nodes.size;
	}

	/** While the app vouches for it, who is not in here is unknown; otherwise only perhaps. */
	isCurrent(nowMs: number): boolean {
		return nowMs < this.#vouchedUntilMs;
	}

	vouch(nowMs: number): void {
		this.#vouchedUntilMs = nowMs + this.vouchMs;
	}

	/** The app is gone or can't ask its database. */
	doubt(): void {
		this.#vouchedUntilMs = 0;
		this.#staging = null;
	}

	/** One part of the full list; with the last one it takes the place of what was known. */
	stage(entries: readonly NodeDirectoryEntry[], part: 'first' | 'middle' | 'last' | 'only'): void {
		if (part === 'first' || part === 'only') this.#staging = new Map();
		if (this.#staging === null) return;
		for (const entry of entries) this.#staging.set(entry.serial, hashesOf(entry));
		if (part !== 'last' && part !== 'only') return;
		this.#nodes = this.#staging;
		this.#staging = null;
	}

	change(entries: readonly NodeDirectoryEntry[], removed: readonly string[]): void {
		for (const target of [this.#nodes, this.#staging]) {
			if (target === null) continue;
			for (const serial of removed) target.delete(serial);
			for (const entry of entries) target.set(entry.serial, hashesOf(entry));
		}
	}

	/** Whether a connection that signed in with this hash may go on. */
	allows(serial: string, hash: string): boolean {
		return (this.#nodes.get(serial) ?? []).some((known) => known.toString('hex') === hash);
	}

	/** Takes the same time for an unknown serial, a wrong and a right password. */
	check(serial: string, password: Uint8Array, nowMs: number): Check {
		const given = sha256(password);
		const known = this.#nodes.get(serial);
		const first = timingSafeEqual(given, known?.[0] ?? NOBODY);
		const second = timingSafeEqual(given, known?.[1] ?? NOBODY);
		if (known !== undefined && (first || second)) return { ok: true, hash: given.toString('hex') };
		return { ok: false, reason: this.isCurrent(nowMs) ? 'refused' : 'unavailable' };
	}
}

const hashesOf = (entry: NodeDirectoryEntry): Buffer[] =>
	entry.hashes
		.slice(0, 2)
		.map((hash) => Buffer.from(hash, 'hex'))
		.filter((hash) => hash.length === 32);

/** Whether a secret is the expected one, in constant time whatever its length. */
export const sameSecret = (given: Uint8Array, expected: string): boolean =>
	timingSafeEqual(sha256(given), sha256(Buffer.from(expected, 'utf8')));
