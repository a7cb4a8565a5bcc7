import { expect, test } from 'vitest';
import { speaking } from '$lib/server/auth/language';
import { NOT_ASKED } from '$lib/server/refreshes/ask';
import { DUE_WORDS } from '$lib/server/refreshes/settings';
import { refreshPhrase } from './refresh-phrases';

const inGerman = async (text: string) =>
	await speaking('de', async () => await Promise.resolve(refreshPhrase(text)));

test('in English the record is said as it is kept', () => {
	expect(refreshPhrase('proved: the film had lost 37.7 mG (7.9 %)')).toBe(
		'proved: the film had lost 37.7 mG (7.9 %)'
	);
});

test.each([
	[
		'proved: the film had lost 37.7 mG (7.9 %)',
		'nachgewiesen: der Film hatte 37,7 mG (7,9 %) verloren'
	],
	[
		'not cured: 12 still readings of at least 60; its offset is in use',
		'nicht behoben: 12 ruhige Messungen von mindestens 60; sein Offset gilt'
	],
	['by schedule: the film is flipped', 'nach Zeitplan: der Film ist umgeklappt'],
	['mostly Tue 10–14 h; every day 0–6 h', 'meist Di 10–14 h; täglich 0–6 h'],
	['reads low since the works', 'reads low since the works']
])('%s', async (english, german) => {
	expect(await inGerman(english)).toBe(german);
});

test('every reason that a list can show has its German', async () => {
	const shown = [
		...Object.values(DUE_WORDS),
		...[NOT_ASKED.not_placed, NOT_ASKED.withdrawn, NOT_ASKED.open_already, NOT_ASKED.visit_first]
	];
	for (const text of shown) expect(await inGerman(text)).not.toBe(text);
});
