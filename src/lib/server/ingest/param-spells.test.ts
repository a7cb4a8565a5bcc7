import { expect, test } from 'vitest';
import { ParamSpells, spellAt, type ParameterRow } from './param-spells';

const row = (wanted: Partial<ParameterRow>): ParameterRow => ({
	siteId: 1,
	nodeId: null,
	name: 'onMg',
	value: '40',
	fromMs: 1_000,
	untilMs: null,
	...wanted
});
const at = (rows: ParameterRow[], atMs: number, nodeId = 7) =>
	spellAt(new ParamSpells(rows).of(1, nodeId), atMs);

test('before its first moment a setting changes nothing, from it on it holds', () => {
	expect(at([row({})], 999)).toEqual({ params: {}, fromMs: -Infinity, toMs: 1_000 });
	expect(at([row({})], 1_000)).toEqual({ params: { onMg: 40 }, fromMs: 1_000, toMs: Infinity });
});

test('an ended setting gives way to the next without a gap', () => {
	const rows = [row({ untilMs: 5_000 }), row({ value: '55', fromMs: 5_000 })];
	expect(at(rows, 4_999).params).toEqual({ onMg: 40 });
	expect(at(rows, 5_000).params).toEqual({ onMg: 55 });
});

test('a node’s own setting wins over its site’s, whichever was made first', () => {
	const rows = [row({ nodeId: 7, value: '90', fromMs: 0 }), row({ fromMs: 500 })];
	expect(at(rows, 2_000).params).toEqual({ onMg: 90 });
	expect(at(rows, 2_000, 8).params).toEqual({ onMg: 40 });
});

test('a stored value that is no number is left out', () => {
	expect(at([row({ value: 'forty' })], 2_000).params).toEqual({});
});

test('another site’s setting does not reach', () => {
	expect(at([row({ siteId: 2 })], 2_000).params).toEqual({});
});
