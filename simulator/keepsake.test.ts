import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { freshFilm } from './film';
import { loadKeepsake, newKeepsake, saveKeepsake } from './keepsake';

let dir = '';
beforeEach(() => {
	dir = mkdtempSync(join(tmpdir(), 'lodekeep-sim-'));
});
afterEach(() => rmSync(dir, { recursive: true }));

test('nothing is remembered where nothing was kept', () => {
	expect(loadKeepsake(dir)).toBeNull();
});

test('what is kept comes back whole, infinities and all, and only its owner may read it', () => {
	const keepsake = newKeepsake(['A-0001'], 1000);
	keepsake.nodes['A-0001'] = {
		keyHex: keepsake.keys['A-0001']!,
		boot: 3,
		seqFrom: 17,
		atMs: 123,
		eventNext: 2,
		film: freshFilm(0),
		surroundingsMg: [0, 1, 2],
		housing: { headingDeg: 10, rollDeg: 0, pitchDeg: 0 },
		habit: { periodS: 60, deltaMg: 8 },
		pulses: 4,
		pulsedMs: 99,
		frames: 1,
		radioMs: 2,
		obeyed: [{ idHex: '00', outcome: 0, reason: null }]
	};
	saveKeepsake(dir, keepsake);
	expect(loadKeepsake(dir)).toEqual(keepsake);
	expect(statSync(join(dir, 'state.json')).mode & 0o777).toBe(0o600);
});

test('keys are 32 bytes and differ', () => {
	const { keys } = newKeepsake(['A-0001', 'A-0002'], 0);
	expect(keys['A-0001']).toMatch(/^[0-9a-f]{64}$/);
	expect(keys['A-0001']).not.toBe(keys['A-0002']);
});
