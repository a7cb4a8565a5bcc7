import { expect, test } from 'vitest';
import { CHAPTERS, type Chapter } from './rules';
import { CHAPTERS_DE } from './rules-de';

/** Per rule: its example, how many sentences it has, and the settings that they name. */
const bones = (chapters: readonly Chapter[]) =>
	chapters.map(({ rules }) =>
		rules.map(({ example, text }) => {
			const named: string[] = [];
			const sentences = text((name) => {
				named.push(name);
				return name;
			});
			return { example, sentences: sentences.length, named: named.sort() };
		})
	);

test('the German rules have the same chapters, examples, sentences and settings as the English', () => {
	expect(bones(CHAPTERS_DE)).toEqual(bones(CHAPTERS));
	expect(CHAPTERS.length).toBeGreaterThan(3);
});
