import { AsyncLocalStorage } from 'node:async_hooks';
import type { Cookies, RequestEvent } from '@sveltejs/kit';
import { isLanguage, speakFrom, type Language } from '$lib/format/messages';
import { de } from '$lib/format/messages/de';
import { en } from '$lib/format/messages/en';

const COOKIE = 'lodekeep-language';
const YEAR_S = 365 * 86_400;
const SPOKEN = { en, de } as const;

/** The language of the request at hand; outside of one (mail, rules) English. */
const current = new AsyncLocalStorage<Language>();
speakFrom(() => SPOKEN[current.getStore() ?? 'en']);

/** Set by hand, else what the browser asks for first, else English. */
export function languageOf(event: Pick<RequestEvent, 'cookies' | 'request'>): Language {
	const set = event.cookies.get(COOKIE);
	if (isLanguage(set)) return set;
	return /^\s*de\b/i.test(event.request.headers.get('accept-language') ?? '') ? 'de' : 'en';
}

/** Everything drawn by `work` is in that language. */
export async function speaking<T>(language: Language, work: () => Promise<T>): Promise<T> {
	return await current.run(language, work);
}

/** No secret: the page may be drawn with it before anybody signs in. */
export function setLanguage(
	cookies: Pick<Cookies, 'set'>,
	language: Language,
	secure: boolean
): void {
	cookies.set(COOKIE, language, {
		...{ path: '/', httpOnly: true, sameSite: 'lax', secure },
		maxAge: YEAR_S
	});
}
