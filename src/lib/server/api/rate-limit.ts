/**
 * Request limits and the fields of draft-ietf-httpapi-ratelimit-headers (text of 2025-09-23,
 * check-values 9j): `RateLimit-Policy: "name";q=…;w=…` and `RateLimit: "name";r=…;t=…`.
 */
export interface Policy {
	readonly name: string;
	readonly requests: number;
	readonly windowS: number;
}

/** A key may ask 20 times a second for a minute; a person's open sheets stay far below. */
export const POLICIES = {
	key: { name: 'key', requests: 1200, windowS: 60 },
	person: { name: 'person', requests: 2400, windowS: 60 },
	/** Requests of one address that brought no good key or session. */
	stranger: { name: 'stranger', requests: 120, windowS: 60 }
} as const satisfies Record<string, Policy>;

export interface Verdict {
	readonly allowed: boolean;
	readonly policy: Policy;
	readonly remaining: number;
	readonly resetS: number;
}

interface Window {
	startMs: number;
	used: number;
}

/** Protects the heap against a flood of addresses. */
const MAX_WINDOWS = 20_000;

export class RateLimiter {
	readonly #windows = new Map<string, Window>();

	/** Counts one request of `who` in a fixed window that begins with its first request. */
	take(who: string, policy: Policy, nowMs: number): Verdict {
		const window = this.#windowOf(`${policy.name} ${who}`, policy, nowMs);
		const allowed = window.used < policy.requests;
		if (allowed) window.used++;
		const endMs = window.startMs + policy.windowS * 1000;
		return {
			allowed,
			policy,
			remaining: policy.requests - window.used,
			resetS: Math.max(1, Math.ceil((endMs - nowMs) / 1000))
		};
	}

	#windowOf(key: string, policy: Policy, nowMs: number): Window {
		const found = this.#windows.get(key);
		if (found !== undefined && nowMs - found.startMs < policy.windowS * 1000) return found;
		const fresh = { startMs: nowMs, used: 0 };
		this.#windows.delete(key);
		this.#windows.set(key, fresh);
		if (this.#windows.size > MAX_WINDOWS) {
			const oldest = this.#windows.keys().next().value;
			if (oldest !== undefined) this.#windows.delete(oldest);
		}
		return fresh;
	}
}

export function rateFields(v: Verdict): Record<string, string> {
	const { name, requests, windowS } = v.policy;
	return {
		'ratelimit-policy': `"${name}";q=${requests};w=${windowS}`,
		ratelimit: `"${name}";r=${v.remaining};t=${v.resetS}`
	};
}
