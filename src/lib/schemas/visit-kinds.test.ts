import { expect, test } from 'vitest';
import { CHECKS, checksOf, endsRequest, loadListOf, opensCell } from './visit-kinds';

/* Expected values: issue 6, 'Visits' ("the list says what to load: cells, spare nodes by profile, tools"),
   counted by hand from the stops written here. */

test('a stop of two causes has each check once, securing the work area first', () => {
	const checks = checksOf(['low_cell', 'silent']);
	expect(checks[0]).toBe('area_secured');
	expect(new Set(checks).size).toBe(checks.length);
	expect(checks).toContain('cell_changed');
	expect(checks).toContain('nothing_over_it');
	expect(checks.at(-1)).toBe('heard_again');
});

test('checks stand in one order whatever order the causes came in', () => {
	expect(checksOf(['clipped', 'swap'])).toEqual(checksOf(['swap', 'clipped']));
	const at = checksOf(['swap', 'by_hand']).map((check) => CHECKS.indexOf(check));
	expect(at).toEqual([...at].sort((a, b) => a - b));
});

test('buried services are checked before a node is swapped, and only then', () => {
	expect(checksOf(['swap'])).toContain('services_checked');
	expect(checksOf(['low_cell', 'clipped', 'not_cured', 'silent'])).not.toContain(
		'services_checked'
	);
});

test('cells, spare nodes by profile and tools follow from the stops', () => {
	const load = loadListOf([
		{ causes: ['low_cell'], profile: 'amr-18-16384' },
		{ causes: ['silent', 'low_cell'], profile: 'amr-18-16384' },
		{ causes: ['not_cured'], profile: 'amr-16-4096' },
		{ causes: ['swap'], profile: 'amr-18-16384' },
		{ causes: ['clipped'], profile: 'amr-18-16384' },
		{ causes: ['by_hand'], profile: null }
	]);
	// Cells: the low one and the silent one. Spares: silent and swap of the one profile, not cured of the other.
	expect(load.cells).toBe(2);
	expect(load.seals).toBe(3);
	expect(load.spareNodes).toEqual([
		{ profile: 'amr-16-4096', count: 1 },
		{ profile: 'amr-18-16384', count: 2 }
	]);
	expect(load.tools).toContain('services_plan');
	expect(new Set(load.tools).size).toBe(load.tools.length);
});

test('a walk for a look alone takes the gear of every walk and no parts', () => {
	expect(loadListOf([{ causes: ['by_hand'], profile: 'amr-18-16384' }])).toEqual({
		cells: 0,
		seals: 0,
		spareNodes: [],
		tools: ['warning_gear', 'cover_key', 'torch_brush']
	});
});

test('a bay not reached, or whose node is to be swapped, stays asked for', () => {
	expect(endsRequest('not_reached')).toBe(false);
	expect(endsRequest('to_be_swapped')).toBe(false);
	expect(endsRequest('nothing_found')).toBe(true);
});

test('the lithium caution is for stops where a cell is opened', () => {
	expect(opensCell(['clipped', 'by_hand'])).toBe(false);
	expect(opensCell(['clipped', 'low_cell'])).toBe(true);
});
