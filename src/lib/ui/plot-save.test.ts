import { expect, test } from 'vitest';
import { asCsv, fileStem } from './plot-save';

test('CSV ends lines by CRLF and doubles quotes (RFC 4180, sections 2.1 and 2.7)', () => {
	expect(asCsv({ head: ['time_utc', 'a "b"'], rows: [['x,y', 1.239]] })).toBe(
		'time_utc,"a ""b"""\r\n"x,y",1.24\r\n'
	);
});
test('a gap is an empty field and a reading of 0 mG is kept', () => {
	expect(asCsv({ head: ['a', 'b'], rows: [[null, 0]] })).toBe('a,b\r\n,0\r\n');
});
test('text that a spreadsheet would run as a formula is set in an apostrophe, a negative number is not', () => {
	expect(asCsv({ head: ['a'], rows: [['=1+1'], [-3.5]] })).toBe("a\r\n'=1+1\r\n-3.5\r\n");
});
test('a title becomes a plain file name', () => {
	expect(fileStem('Störung von „B07“, mG')).toBe('sto-rung-von-b07-mg');
	expect(fileStem('…')).toBe('plot');
});
