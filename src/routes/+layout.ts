import { browser } from '$app/environment';
import { isLanguage, speakFrom } from '$lib/format/messages';
import type { LayoutLoad } from './$types';

/** The browser learns the page's language before its first drawing; English is in the bundle already. */
export const load: LayoutLoad = async () => {
	if (!browser) return;
	const { lang } = document.documentElement;
	if (!isLanguage(lang) || lang === 'en') return;
	const { de } = await import('$lib/format/messages/de');
	speakFrom(() => de);
};
