import { createHash, createHmac, randomBytes, timingSafeEqual } from 'node:crypto';
import { decode, encode } from '@auth/core/jwt';
import { z } from 'zod';

/** A session not used for this long is over. */
export const SESSION_MAX_AGE_S = 14 * 86_400;
/** On a page load a session older than this gets a new cookie. */
export const RENEW_AFTER_S = 86_400;
/** A device is remembered for this long after its last sign-in. */
export const DEVICE_MAX_AGE_S = 180 * 86_400;
const REMEMBER_MS = 60_000;
/** Protects the heap against a flood of made-up cookies. */
const MAX_REMEMBERED = 10_000;

const claims = z.object({
	sub: z.string().regex(/^[1-9]\d{0,9}$/),
	ver: z.int(),
	iat: z.number(),
	exp: z.number()
});

export interface Session {
	personId: number;
	version: number;
	issuedAtS: number;
	expiresAtS: number;
}

export interface SessionKeys {
	/** The present one first; a former one still opens sessions. */
	secrets: readonly string[];
	/** __Host- and Secure on https. */
	secure: boolean;
}

export const sessionCookieName = (secure: boolean): string =>
	secure ? '__Host-lodekeep-session' : 'lodekeep-session';
export const deviceCookieName = (secure: boolean): string =>
	secure ? '__Host-lodekeep-device' : 'lodekeep-device';

export const cookieOptions = (secure: boolean) =>
	({ httpOnly: true, sameSite: 'lax', path: '/', secure }) as const;

/** Decodes each cookie once (over 0.3 ms of key derivation and decryption) and remembers it by its hash. */
export class Sessions {
	readonly #remembered = new Map<string, { session: Session | null; atMs: number }>();
	readonly cookieName: string;

	constructor(private readonly keys: SessionKeys) {
		this.cookieName = sessionCookieName(keys.secure);
	}

	async read(cookie: string, nowMs: number): Promise<Session | null> {
		const key = createHash('sha256').update(cookie).digest('base64url');
		const known = this.#remembered.get(key);
		if (known !== undefined && nowMs - known.atMs < REMEMBER_MS) {
			return stillOn(known.session, nowMs);
		}
		const session = await this.#decode(cookie);
		this.#remembered.delete(key);
		this.#remembered.set(key, { session, atMs: nowMs });
		if (this.#remembered.size > MAX_REMEMBERED) {
			const oldest = this.#remembered.keys().next().value;
			if (oldest !== undefined) this.#remembered.delete(oldest);
		}
		return stillOn(session, nowMs);
	}

	/** As Auth.js takes them, the present one first. */
	get secrets(): readonly string[] {
		return this.keys.secrets;
	}

	/** The value of a new cookie. */
	async issue(personId: number, version: number): Promise<string> {
		return await encode({
			token: { sub: String(personId), ver: version },
			secret: [...this.keys.secrets],
			salt: this.cookieName,
			maxAge: SESSION_MAX_AGE_S
		});
	}

	async #decode(cookie: string): Promise<Session | null> {
		if (cookie.length > 4096) return null;
		try {
			const token = await decode({
				token: cookie,
				secret: [...this.keys.secrets],
				salt: this.cookieName
			});
			const parsed = claims.safeParse(token);
			if (!parsed.success) return null;
			const { sub, ver, iat, exp } = parsed.data;
			return { personId: Number(sub), version: ver, issuedAtS: iat, expiresAtS: exp };
		} catch {
			// Not ours, altered, expired or under a secret that is gone: no session.
			return null;
		}
	}
}

function stillOn(session: Session | null, nowMs: number): Session | null {
	return session !== null && session.expiresAtS * 1000 > nowMs ? session : null;
}

/** A device cookie says only: a person with this id signed in here before. `<id>.<random>.<mac>` */
export class Devices {
	constructor(private readonly key: Buffer) {}

	issue(personId: number): string {
		const body = `${personId}.${randomBytes(9).toString('base64url')}`;
		return `${body}.${this.#mac(body)}`;
	}

	/** The device's id when the cookie is ours and of this person, else null. */
	idFor(cookie: string | undefined, personId: number): string | null {
		const match = /^((\d{1,10})\.[\w-]{12})\.([\w-]{43})$/.exec(cookie ?? '');
		if (match === null || Number(match[2]) !== personId) return null;
		const expected = Buffer.from(this.#mac(match[1] as string));
		return timingSafeEqual(expected, Buffer.from(match[3] as string)) ? (match[1] as string) : null;
	}

	#mac(body: string): string {
		return createHmac('sha256', this.key).update(`device ${body}`).digest('base64url');
	}
}
