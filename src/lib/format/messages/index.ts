import { en } from './en';

/** The shape that every language fills: English's keys, with sentences and functions of its own. */
export type Widened<T> = T extends string
	? string
	: T extends readonly string[]
		? readonly string[]
		: T extends (...values: infer A) => string
			? (...values: A) => string
			: { readonly [K in keyof T]: Widened<T[K]> };
export type Messages = Widened<typeof en>;

export const LANGUAGES = { en: 'English', de: 'Deutsch' } as const;
export type Language = keyof typeof LANGUAGES;
export const isLanguage = (text: string | null | undefined): text is Language =>
	text === 'en' || text === 'de';

/**
 * Who says which language speaks. In the browser it is the page's, chosen once before the first drawing; on
 * the server it asks the request at hand, so that nobody reads in another person's language.
 */
let source: () => Messages = () => en;
export function speakFrom(next: () => Messages): void {
	source = next;
}

/** The words of the language that speaks. */
export const words = (): Messages => source();

/** A word named after an API value; undefined where there is none. */
export const named = (table: object, value: string): string | undefined => {
	const found: unknown = Object.hasOwn(table, value)
		? (table as Record<string, unknown>)[value]
		: undefined;
	return typeof found === 'string' ? found : undefined;
};

/**
 * The words of one area of the product, both languages in one module beside this one: an area's sheets
 * load them, the plan does not. `both` is for the tests.
 */
export const area = <T extends object, G extends Widened<T>>(en: T & Widened<T>, de: G) =>
	Object.assign((): Widened<T> => (words().locale === 'de-DE' ? de : en), { both: { en, de } });
