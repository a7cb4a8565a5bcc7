import { expect, test } from 'vitest';
import type { UpFrame } from '$lib/wire/types';
import { FLAG } from '../clock';
import { freshLive, type NodeEntry } from '../node-entry';
import type { SeenBlocks } from '../seen-blocks';
import { check } from './check';

const NOW = Date.UTC(2026, 2, 2, 8);
const MIN = 60_000;
/** Nothing is stored yet: only times are looked at here. */
const NOTHING_SEEN = { isStored: () => false, note: () => ({}) } as unknown as SeenBlocks;

/** Flags of readings of one node without a clock, as they arrive a minute apart. */
function flagsOf(heard: readonly { boot: number; seq: number }[]): number[] {
	const entry = { id: 1, live: freshLive() } as NodeEntry;
	const messages = heard.map(({ boot, seq }, i) => ({
		entry,
		message: { arrivedAtMs: NOW + i * MIN } as never,
		frame: { kind: 'reading', boot, seq, t: 0, sentMs: null, rows: [] } as unknown as UpFrame
	}));
	return check(messages, NOTHING_SEEN).fresh.map(({ time }) => time.flags);
}

const moves = FLAG.clockless;
const straggler = FLAG.clockless | FLAG.unmoving;

test('without a clock a message that a later one has overtaken moves no state', () => {
	const sent = [0, 1, 3, 2, 4].map((seq) => ({ boot: 5, seq }));
	expect(flagsOf(sent)).toEqual([moves, moves, moves, straggler, moves]);
});

test('a new boot begins its numbers anew, the one before it is a straggler', () => {
	const sent = [
		{ boot: 5, seq: 70 },
		{ boot: 6, seq: 0 },
		{ boot: 5, seq: 71 },
		{ boot: 6, seq: 1 }
	];
	expect(flagsOf(sent)).toEqual([moves, moves, straggler, moves]);
});
