import { expect, test } from 'vitest';
import { filtered, nextOrder, sorted, type Column } from './table-order';

interface Row {
	code: string;
	mv: number | null;
}
const columns: Column<Row>[] = [
	{ key: 'code', title: 'Bay', text: (r) => r.code, sortBy: (r) => r.code },
	{ key: 'mv', title: 'Cell', text: (r) => String(r.mv), sortBy: (r) => r.mv }
];
const rows: Row[] = [
	{ code: 'B10', mv: 0 },
	{ code: 'B2', mv: null },
	{ code: 'B1', mv: 3600 }
];
const codes = (list: Row[]) => list.map((row) => row.code);

test('codes sort as people count: B2 before B10', () => {
	expect(codes(sorted(rows, columns, { key: 'code', direction: 'ascending' }))).toEqual([
		'B1',
		'B2',
		'B10'
	]);
});
test('what was not measured sorts last either way, and 0 is a value', () => {
	expect(codes(sorted(rows, columns, { key: 'mv', direction: 'ascending' }))).toEqual([
		'B10',
		'B1',
		'B2'
	]);
	expect(codes(sorted(rows, columns, { key: 'mv', direction: 'descending' }))).toEqual([
		'B1',
		'B10',
		'B2'
	]);
});
test('every word of the filter must occur', () => {
	expect(codes(filtered(rows, columns, 'b1 3600'))).toEqual(['B1']);
	expect(filtered(rows, columns, '  ')).toHaveLength(3);
});
test('a head pressed three times comes back to the given order', () => {
	const once = nextOrder(null, 'code');
	const twice = nextOrder(once, 'code');
	expect([once?.direction, twice?.direction, nextOrder(twice, 'code')]).toEqual([
		'ascending',
		'descending',
		null
	]);
});
