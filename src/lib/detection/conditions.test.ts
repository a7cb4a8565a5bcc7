import { expect, test } from 'vitest';
import { CONDITIONS_BY_SERIOUSNESS, conditionsOf, rankConditions } from './conditions';
import { Street } from './rows.fixture';

test('conditions rank as the method says', () => {
	expect(CONDITIONS_BY_SERIOUSNESS).toEqual([
		'withdrawn',
		'unplaced',
		'learning',
		'silent',
		'inverted',
		'clipped',
		'refresh_due',
		'drifting',
		'in_service'
	]);
});

test('the most serious is shown first, the others are kept, each once', () => {
	expect(rankConditions(['drifting', 'silent', 'clipped', 'silent'])).toEqual([
		'silent',
		'clipped',
		'drifting'
	]);
});

test('a node is in service only when nothing else holds', () => {
	expect(rankConditions([])).toEqual(['in_service']);
	expect(rankConditions(['in_service'])).toEqual(['in_service']);
	expect(rankConditions(['in_service', 'drifting'])).toEqual(['drifting']);
});

test('an inverted film that also waits for its film refresh says both', () => {
	const n = new Street().commission().group.nodes[0]!;
	n.slow.signs = [1, -1, 1];
	n.slow.refreshWhy = 'the film has flipped';
	expect(conditionsOf(n)).toEqual(['inverted', 'refresh_due']);
});

test('one clipped reading is no condition, two are', () => {
	const n = new Street().commission().group.nodes[0]!;
	n.fast.clippedRun = 1;
	expect(conditionsOf(n)).toEqual(['in_service']);
	n.fast.clippedRun = 2;
	expect(conditionsOf(n)).toEqual(['clipped']);
});
