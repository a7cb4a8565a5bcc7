import { expect, test } from 'vitest';
import { safeReturn } from './paths';

test.each([
	['/sites/yard/plan?zone=A#b', '/sites/yard/plan?zone=A#b'],
	['/', '/'],
	[null, '/'],
	['', '/'],
	['sites', '/'],
	['https://other.example/', '/'],
	['//other.example', '/'],
	['/\\other.example', '/'],
	['/\t/other.example', '/'],
	['/\n/other.example', '/'],
	['/a/..//other.example', '/'],
	['javascript:alert(1)', '/'],
	['/auth/signout', '/']
])('%j leads to %s', (to, path) => {
	expect(safeReturn(to)).toBe(path);
});
