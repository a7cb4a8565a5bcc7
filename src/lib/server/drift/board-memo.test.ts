import { expect, test } from 'vitest';
import { driftSettings } from '$lib/drift/params';
import type { DriftRow } from '$lib/schemas/desk-drift';
import type { MarkedRow } from '$lib/server/store/queries/drift-view';
import { BoardMemo, settingsKeys } from './board-memo';

const row: MarkedRow = {
	...{ nodeId: 7, serial: 'NODE-7', bay: 'A1', zone: 'A', headingDeg: null },
	...{ condition: 'in_service', also: '', changedAtMs: 1_000, memoryMark: '12 300' }
};
const made = { serial: 'NODE-7' } as DriftRow;

test('a row is given again while nothing that it depends on has changed', () => {
	const memo = new BoardMemo();
	memo.keep(row, 's', made);
	expect(memo.rowOf({ ...row }, 's')).toBe(made);
});

test.each<[string, Partial<MarkedRow>]>([
	['another memory', { memoryMark: '13 300' }],
	['another condition', { condition: 'drifting' }],
	['a condition beside it', { also: 'refresh_due' }],
	['a change of what is shown', { changedAtMs: 2_000 }],
	['another bay', { bay: 'A2' }],
	['a heading entered', { headingDeg: 90 }]
])('%s asks for the row anew', (_, changed) => {
	const memo = new BoardMemo();
	memo.keep(row, 's', made);
	expect(memo.rowOf({ ...row, ...changed }, 's')).toBeNull();
});

test('other settings of the node ask for the row anew', () => {
	const memo = new BoardMemo();
	const site = driftSettings();
	const key = settingsKeys(site);
	memo.keep(row, key(site), made);
	expect(memo.rowOf(row, key(driftSettings({ driftingMg: 12 })))).toBeNull();
	expect(memo.rowOf(row, key(site))).toBe(made);
});
