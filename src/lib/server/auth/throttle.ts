/**
 * Failed sign-ins are counted in three places, so that guessing is slow and nobody can be locked out
 * by somebody else's guessing:
 *
 * - per address (an IPv6 /64 is one): DEFAULTS.perAddress in a window;
 * - per person and address: DEFAULTS.perPersonAtAddress;
 * - per person over all addresses: above DEFAULTS.perPerson an address that has already failed for
 *   this person is refused, one that has not still gets its try, so the right password always passes
 *   from somewhere new;
 * - a device that this person signed in on before (a signed cookie) has a count of its own and is
 *   refused by none of the above.
 */
export const DEFAULTS = {
	windowMs: 15 * 60_000,
	perAddress: 20,
	perPersonAtAddress: 5,
	perPerson: 50,
	perDevice: 10
} as const;

export type ThrottleParams = { readonly [K in keyof typeof DEFAULTS]: number };

export interface Attempt {
	/** Address as typed, lower case; no person need be behind it. */
	email: string;
	address: string;
	/** Id of a device that this very person signed in on before; null for any other. */
	deviceId: string | null;
}

export type Admission = { ok: true } | { ok: false; retryAfterS: number };

interface Count {
	startMs: number;
	n: number;
}

/** Protects the heap; the oldest counts go first. */
const MAX_COUNTS = 50_000;

/** Neighbours in one IPv6 /64 are one household; IPv4 written in IPv6 is IPv4. */
export function addressBlock(address: string): string {
	const plain = address.replace(/^::ffff:(?=\d+\.)/i, '');
	if (!plain.includes(':')) return plain;
	const [head = '', tail = ''] = plain.split('::');
	const left = head === '' ? [] : head.split(':');
	const right = tail === '' ? [] : tail.split(':');
	const gap = plain.includes('::') ? Math.max(0, 8 - left.length - right.length) : 0;
	const groups = [...left, ...Array<string>(gap).fill('0'), ...right];
	return (
		groups
			.slice(0, 4)
			.map((g) => g.toLowerCase().replace(/^0+(?=.)/, ''))
			.join(':') + '::/64'
	);
}

export class Throttle {
	readonly #counts = new Map<string, Count>();

	constructor(private readonly params: ThrottleParams = DEFAULTS) {}

	/**
	 * Counts the attempt as failed before it is tried, so that many at once cannot pass together;
	 * `succeeded` takes it back.
	 */
	admit(attempt: Attempt, nowMs: number): Admission {
		const blocking = this.#blocking(attempt, nowMs);
		if (blocking !== null) {
			const endMs = blocking.startMs + this.params.windowMs;
			return { ok: false, retryAfterS: Math.max(1, Math.ceil((endMs - nowMs) / 1000)) };
		}
		for (const key of this.#keysOf(attempt)) this.#add(key, nowMs);
		return { ok: true };
	}

	succeeded(attempt: Attempt): void {
		for (const key of this.#keysOf(attempt)) {
			const count = this.#counts.get(key);
			if (count !== undefined && --count.n <= 0) this.#counts.delete(key);
		}
	}

	#blocking(a: Attempt, nowMs: number): Count | null {
		const over = (key: string, limit: number): Count | null => {
			const count = this.#live(key, nowMs);
			return count !== null && count.n >= limit ? count : null;
		};
		if (a.deviceId !== null) return over(device(a.deviceId), this.params.perDevice);
		const here = over(pair(a), this.params.perPersonAtAddress);
		if (here !== null) return here;
		const address = over(from(a), this.params.perAddress);
		if (address !== null) return address;
		if (over(person(a), this.params.perPerson) === null) return null;
		return this.#live(pair(a), nowMs);
	}

	#keysOf(a: Attempt): string[] {
		return a.deviceId === null ? [from(a), pair(a), person(a)] : [device(a.deviceId)];
	}

	#live(key: string, nowMs: number): Count | null {
		const count = this.#counts.get(key);
		return count !== undefined && nowMs - count.startMs < this.params.windowMs ? count : null;
	}

	#add(key: string, nowMs: number): void {
		const count = this.#live(key, nowMs);
		if (count !== null) {
			count.n++;
			return;
		}
		this.#counts.delete(key);
		this.#counts.set(key, { startMs: nowMs, n: 1 });
		if (this.#counts.size <= MAX_COUNTS) return;
		const oldest = this.#counts.keys().next().value;
		if (oldest !== undefined) this.#counts.delete(oldest);
	}
}

const from = (a: Attempt): string => `a ${addressBlock(a.address)}`;
const person = (a: Attempt): string => `p ${a.email}`;
const pair = (a: Attempt): string => `b ${addressBlock(a.address)} ${a.email}`;
const device = (id: string): string => `d ${id}`;
