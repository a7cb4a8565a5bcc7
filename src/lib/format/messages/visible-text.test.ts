import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { visibleText } from '../../../../tests/support/visible-text';
import { de } from './de';
import { en } from './en';

const ROOMS = ['src/lib/ui', 'src/lib/components', 'src/routes/(app)', 'src/routes/(public)'];

/** Texts that are the same in every language, by file. */
const SAME: Readonly<Record<string, readonly string[]>> = {
	'src/routes/(app)/connections/+page.svelte': ['Authorization: Bearer …'],
	// Of an error that nobody is shown: the dialog stands only where there is a key.
	'src/lib/components/visit/waiting.svelte.ts': ['no key']
};
/** For developers and admins only, and made of samples. */
const SAMPLES = /\/desk\/primer\//;
/** Markup for a machine, and names that are keys of `words().sheet` (held below). */
const NO_TEXT = ['src/lib/components/plan/svg-pen.ts', 'src/lib/components/sheet/sheets.ts'];

const within = (room: string): string[] =>
	readdirSync(room, { recursive: true, encoding: 'utf8' }).map((name) => `${room}/${name}`);
const files = (ending: string): string[] =>
	[...ROOMS.flatMap(within), ...readdirSync('src/routes').map((name) => `src/routes/${name}`)]
		.filter((file) => file.endsWith(ending) && !file.endsWith('.test.ts'))
		.filter((file) => !SAMPLES.test(file) && !NO_TEXT.includes(file))
		.sort();
const found = (file: string, source: string): string[] =>
	visibleText(source)
		.filter(({ text }) => SAME[file]?.includes(text) !== true)
		.map(({ line, text }) => `${file}:${line}: ${text}`);

describe('visible text stands in the messages', () => {
	test('of every component and sheet', () => {
		const all = files('.svelte');
		expect(all.length).toBeGreaterThan(90);
		expect(all.flatMap((file) => found(file, readFileSync(file, 'utf8')))).toEqual([]);
	});
	test('of every module beside them', () => {
		const all = files('.ts').filter((file) => !/\/rules(?:-de)?\.ts$/.test(file));
		const read = (file: string) => `<script lang="ts">${readFileSync(file, 'utf8')}</script>`;
		expect(all.flatMap((file) => found(file, read(file)))).toEqual([]);
	});
	test('also the name of a sheet, which is a key of the messages', () => {
		const names = files('.svelte').flatMap((file) =>
			[...readFileSync(file, 'utf8').matchAll(/<AppSheet[^>]*?\sname="([^"{]+)"/g)].map(
				([, n]) => n
			)
		);
		const sheets = readFileSync('src/lib/components/sheet/sheets.ts', 'utf8');
		names.push(...[...sheets.matchAll(/name: '([^']+)'/g)].map(([, n]) => n));
		expect(names.length).toBeGreaterThan(20);
		for (const name of names) {
			expect(Object.keys(en.sheet)).toContain(name);
			expect(Object.keys(de.sheet)).toContain(name);
		}
	});
});

describe('the finder', () => {
	const literals = (source: string) => visibleText(source).map(({ text }) => text);
	test('sees text, attributes, expressions and script that a person would read', () => {
		expect(literals('<p>Ask the node {serial}</p>')).toEqual(['Ask the node']);
		expect(literals('<input aria-label="Bay code" class="px-2 py-1" />')).toEqual(['Bay code']);
		expect(literals("<Button>{sure ? 'Back' : said.leave}</Button>")).toEqual(['Back']);
		expect(literals('<Empty title={`No bay in ${zone}`} />')).toEqual(['No bay in']);
		expect(
			literals("<script lang=\"ts\">const columns = [{ key: 'bay', title: 'Bay' }];</script>")
		).toEqual(['Bay']);
		expect(literals('<script lang="ts">note(`${code} is settled.`);</script>')).toEqual([
			'is settled.'
		]);
	});
	test('leaves classes, units, codes and keys alone', () => {
		expect(
			literals('<p class={["font-semibold grow", on && "px-2"]}>{words().x} mG · °C</p>')
		).toEqual([]);
		expect(literals('{#if state === \'occupied\'}<a href="/sites/x">{code}</a>{/if}')).toEqual([]);
	});
});
