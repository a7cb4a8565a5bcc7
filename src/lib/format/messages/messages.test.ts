import { afterEach, describe, expect, test } from 'vitest';
import { duration } from '../duration';
import { moment } from '../time';
import { conditionSentence, count, stateWord } from '../words';
import { de } from './de';
import { en } from './en';
import { speakFrom } from './index';

/** Every path to a sentence, with how many values it takes. */
function leaves(table: object, path = ''): Record<string, string> {
	return Object.fromEntries(
		Object.entries(table).flatMap(([key, value]: [string, unknown]) => {
			const here = path === '' ? key : `${path}.${key}`;
			if (typeof value === 'string') return [[here, 'text']];
			if (typeof value === 'function') return [[here, `function of ${value.length}`]];
			return Object.entries(leaves(value as object, here));
		})
	);
}
const texts = (table: object): unknown[] =>
	Object.values(table).flatMap((value: unknown) =>
		typeof value === 'object' && value !== null ? texts(value) : [value]
	);

afterEach(() => {
	speakFrom(() => en);
});

/** Every area module beside this file that was made by `area`. */
interface Both {
	both: { en: object; de: object };
}
const AREAS = Object.entries(
	import.meta.glob<Record<string, unknown>>(['./*.ts', '!./*.test.ts'], { eager: true })
).flatMap(([file, module]) =>
	Object.values(module)
		.filter((value): value is Both => typeof value === 'function' && 'both' in value)
		.map(({ both }) => ({ file, ...both }))
);

describe.each(AREAS)('the words of $file', ({ en: english, de: german }) => {
	test('hold the same keys in both languages, no sentence left in English', () => {
		expect(leaves(german)).toEqual(leaves(english));
		const [all, other] = [texts(english), texts(german)];
		const sentences = all.filter((text) => typeof text === 'string' && /\w+ \w+ \w+/.test(text));
		expect(sentences.filter((text) => other.includes(text))).toEqual([]);
	});
	test('use the reserved words: never refresh alone, never cancelled', () => {
		for (const text of texts(english)) {
			const said = typeof text === 'function' ? text.toString() : String(text);
			expect(said).not.toMatch(/cancel/i);
			if (typeof text === 'string' && !/^refresh: /.test(text))
				expect(text).not.toMatch(/(?<!film )\brefresh/i);
		}
		for (const text of texts(german))
			if (typeof text === 'string') expect(text).not.toMatch(/(?<!Film)auffrischung|storniert/i);
	});
});
test('there are area modules to look at', () => {
	expect(AREAS.length).toBeGreaterThan(10);
});

describe('both languages', () => {
	test('hold the same keys, and functions of the same values', () => {
		expect(leaves(de)).toEqual(leaves(en));
		expect(Object.keys(leaves(en)).length).toBeGreaterThan(150);
	});
	test('leave no text empty', () => {
		for (const text of [...texts(en), ...texts(de)])
			if (typeof text === 'string') expect(text.trim()).not.toBe('');
	});
	test('use the reserved words: never refresh alone, never cancelled', () => {
		const all = texts(en).filter((text) => typeof text === 'string');
		for (const text of all) {
			expect(text).not.toMatch(/(?<!film )refresh/i);
			expect(text).not.toMatch(/cancel/i);
		}
	});
});

test('in German the same facts are said in German, dates by Intl', () => {
	// 2026-03-03T06:55Z is 07:55 in Berlin (UTC+1 in winter); German writes the day before the month.
	const atMs = Date.UTC(2026, 2, 3, 6, 55);
	speakFrom(() => de);
	expect(stateWord('occupied')).toBe('belegt');
	expect(conditionSentence('silent', '07:55')).toBe('nicht gehört seit 07:55');
	expect([count(1, 'bay'), count(3, 'bay')]).toEqual(['1 Stellplatz', '3 Stellplätze']);
	expect(moment(atMs, 'Europe/Berlin', atMs + 86_400_000)).toMatch(/^3\. März 07:55$/);
	expect(duration(77 * 60_000)).toBe('1 h 17 min');
	speakFrom(() => en);
	expect(moment(atMs, 'Europe/Berlin', atMs + 86_400_000)).toBe('3 Mar 07:55');
});
