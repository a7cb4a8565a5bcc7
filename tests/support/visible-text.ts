import { parse } from 'svelte/compiler';

/** A text that a person would read and that stands in the component itself. */
export interface Literal {
	/** Line in the file, from 1. */
	line: number;
	text: string;
}

type Branch = Record<string, unknown> & { type?: string };

/** Attributes and properties whose text is read or heard, of elements and of our own components. */
const READ = new Set(
	(
		'aria-label aria-description aria-roledescription aria-valuetext title placeholder alt label legend ' +
		'heading description caption hint text message summary unit trouble detail sheet shows'
	).split(' ')
);
/** Lower-case words with blanks or a capitalized word: 'asking for the bays', 'Close'. */
const WORDLIKE = /\p{L}{2,}[,:;]? \p{L}{2,}|^\p{Lu}\p{Ll}+|\p{L}{2,}[.…]$/u;
/** In script: a capitalized phrase, or nothing but words with blanks between. */
const PHRASE = /^\p{Lu}\p{Ll}+.*[ .…]|^[\p{L}’]+(?:[,;:]? [\p{L}’]+)+[ .,…]*$|^\p{L}+ …$/u;
/** Signs of units, formats and the product's name: the same in every language. */
const SIGNS = /^(?:mG|mV|dBm|nT|mm|px|ms|min|km|CSV|PNG|API|Lodekeep)$/;
/** Calls whose text is for the machine: selectors, media, keys of the messages. */
const MACHINE = new Set([
	'matchMedia',
	'querySelector',
	'querySelectorAll',
	'closest',
	'sheetName'
]);

const lettered = (text: string): boolean =>
	(text.match(/\p{L}{2,}/gu) ?? []).some((word) => !SIGNS.test(word));

/** Every visible text of a component that does not come from the messages. */
export function visibleText(source: string): Literal[] {
	const found: Literal[] = [];
	const tree = parse(source, { modern: true }) as unknown as Branch;
	const note = (at: unknown, text: string) =>
		found.push({
			line: source.slice(0, Number(at)).split('\n').length,
			text: text.trim().replace(/\s+/g, ' ')
		});
	walk(tree['fragment'], { read: true, note });
	walk((tree['instance'] as Branch | null)?.['content'], { read: false, note });
	walk((tree['module'] as Branch | null)?.['content'], { read: false, note });
	return found;
}

interface Walk {
	/** Whether a text here is read by a person whatever it looks like. */
	read: boolean;
	note: (at: unknown, text: string) => void;
}

const SKIPPED = new Set(['ImportDeclaration', 'TSLiteralType', 'StyleSheet', 'Comment']);

function walk(node: unknown, walked: Walk): void {
	if (Array.isArray(node)) for (const one of node) walk(one, walked);
	else if (typeof node === 'object' && node !== null) branch(node as Branch, walked);
}

function branch(node: Branch, walked: Walk): void {
	if (SKIPPED.has(node.type ?? '') || String(node.type).startsWith('TS')) {
		if (node.type?.endsWith('Expression') === true) walk(node['expression'], walked);
		return;
	}
	if (node.type === 'Attribute' || node.type === 'Property') named(node, walked);
	else if (node.type === 'Text') text(node['start'], node['data'], walked);
	else if (node.type === 'Literal') phrase(node['start'], node['value'], walked);
	else if (node.type === 'TemplateElement')
		phrase(node['start'], (node['value'] as Branch)['cooked'], walked);
	else if (node.type === 'CallExpression' && MACHINE.has(calleeOf(node))) return;
	else if (node.type === 'BinaryExpression' || node.type === 'MemberExpression') {
		for (const side of ['left', 'right', 'object'] as const)
			if ((node[side] as Branch | undefined)?.type !== 'Literal') walk(node[side], walked);
	} else
		for (const [key, value] of Object.entries(node))
			if (key !== 'metadata' && key !== 'name_loc') walk(value, walked);
}

/** `title="…"`, `{ text: '…' }`: read when the name says so, else only looked through for phrases. */
function named(node: Branch, walked: Walk): void {
	const name = keyOf(node);
	if (/^(?:class|look|style|d|viewBox|transform|font|href|rel)$/.test(name)) return;
	walk(node['value'], { ...walked, read: READ.has(name) });
}

function calleeOf(call: Branch): string {
	const callee = call['callee'] as Branch;
	return keyOf(callee.type === 'MemberExpression' ? (callee['property'] as Branch) : callee);
}

function keyOf(node: Branch): string {
	const key: unknown = node['name'] ?? (node['key'] as Branch | undefined)?.['name'];
	return typeof key === 'string' ? key : '';
}

function text(at: unknown, value: unknown, { read, note }: Walk): void {
	if (read && typeof value === 'string' && lettered(value)) note(at, value);
}

function phrase(at: unknown, value: unknown, { read, note }: Walk): void {
	if (typeof value !== 'string' || !lettered(value)) return;
	if (read ? WORDLIKE.test(value.trim()) || / /.test(value) : PHRASE.test(value.trim()))
		note(at, value);
}
