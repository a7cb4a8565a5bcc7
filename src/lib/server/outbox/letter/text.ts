import type { Letter } from './letter';

const WIDTH = 72;
const RULE = '-'.repeat(WIDTH);
const LABEL = 17;

/** The same letter for readers without HTML: 72 columns, addresses on lines of their own. */
export function drawText(letter: Letter): string {
	const parts: string[] = [letter.heading, RULE];
	if (letter.news !== null) parts.push(letter.news, '');
	for (const { label, value, href } of letter.lines)
		parts.push(hung(label, href === undefined ? value : `${value}  <${href}>`));
	for (const { title, next, rows } of letter.groups) {
		parts.push('', `${title}: ${next}`);
		for (const row of rows) parts.push(`  ${row.filter((cell) => cell !== '').join('  ')}`);
	}
	if (letter.more !== null) parts.push('', letter.more);
	parts.push('');
	for (const { text, href } of letter.actions) parts.push(`${text}:`, href, '');
	parts.push(RULE, letter.block.map(({ label, value }) => `${label} ${value}`).join(' | '), RULE);
	for (const { text, href } of letter.foot)
		parts.push(href === undefined ? text : `${text}: ${href}`);
	return `${parts.join('\n')}\n`;
}

/** 'Label            words that go on under themselves' */
function hung(label: string, value: string): string {
	const lines: string[] = [];
	let now = '';
	for (const word of value.split(' ')) {
		if (now !== '' && LABEL + now.length + 1 + word.length > WIDTH) {
			lines.push(now);
			now = word;
		} else now = now === '' ? word : `${now} ${word}`;
	}
	return [...lines, now].map((line, i) => (i === 0 ? label : '').padEnd(LABEL) + line).join('\n');
}
