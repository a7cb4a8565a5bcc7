import { expect, test } from 'vitest';
import type { StopView } from '$lib/schemas/visit-view';
import { overlay } from './overlay';

const STOP: StopView = {
	...{ id: 9, request: 4, place: 1, bay: 'A-05', zone: 'A', serial: 'S', profile: 'p' },
	...{ causes: [], ticks: { node_found: true }, parts: {}, notes: [], outcome: null },
	...{ outcomeNote: '', endedAtMs: null, endedBy: null, photos: [], additions: [] }
};
const waits = (kind: 'tick' | 'outcome' | 'note', code: string, more: object = {}) => ({
	...{ id: code, state: 'waiting' as const, madeAtMs: 1, url: null },
	body: { site: 's', visit: 3, stop: 9, bay: 'A-05', kind, code, amount: 1, text: 't' },
	...more
});

test('what waits to be sent shows at its stop, the later over the earlier', () => {
	const off = waits('tick', 'node_found', {});
	off.body = { ...off.body, amount: 0 };
	const shown = overlay(STOP, 3, [off, waits('tick', 'cover_sound'), waits('outcome', 'cured')]);
	expect(shown.ticks).toEqual({ node_found: false, cover_sound: true });
	expect(shown.waitsClosed).toBe('cured');
	expect(STOP.ticks).toEqual({ node_found: true });
});

test('what belongs to another stop or walk, or was refused, changes nothing here', () => {
	const refused = waits('tick', 'cover_sound', { state: 'refused' });
	const other = waits('note', 'n');
	other.body = { ...other.body, stop: 8 };
	const shown = overlay(STOP, 3, [refused, other]);
	expect(shown.ticks).toEqual({ node_found: true });
	expect(shown.notesWaiting).toEqual([]);
	expect(shown.unsure).toBe(true);
	expect(overlay(STOP, 4, [waits('outcome', 'cured')]).waitsClosed).toBeNull();
});
