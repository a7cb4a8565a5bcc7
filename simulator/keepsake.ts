import { randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Obeyed } from './commands';
import type { Film } from './film';
import { ownBeatMs } from './node';
import type { NodeState } from './node-state';
import { rotationOf } from './node-field';

/** What of one node must outlive the process. */
export interface KeptNode {
	keyHex: string;
	boot: number;
	/** First number that was surely never used: numbers are taken in blocks, so that a kill repeats none. */
	seqFrom: number;
	atMs: number;
	eventNext: number;
	film: Film;
	surroundingsMg: [number, number, number];
	housing: { headingDeg: number; rollDeg: number; pitchDeg: number };
	habit: { periodS: number; deltaMg: number };
	pulses: number;
	pulsedMs: number;
	frames: number;
	radioMs: number;
	obeyed: Obeyed[];
}

/** The simulator's memory between two starts; holds node keys, so 0600. */
export interface Keepsake {
	seed: number;
	bornMs: number;
	/** Stays up to this time stand in the truth file. */
	toldToMs: number;
	nodes: Record<string, KeptNode>;
	keys: Record<string, string>;
}

const FILE = 'state.json';
export const SEQ_BLOCK = 2000;
const INFINITE = 'infinity';

/** JSON has no infinities, and the film's 'never' is one. */
const encode = (_: string, value: unknown): unknown =>
	typeof value === 'number' && !Number.isFinite(value)
		? value > 0
			? INFINITE
			: `-${INFINITE}`
		: value;
const decode = (_: string, value: unknown): unknown =>
	value === INFINITE ? Infinity : value === `-${INFINITE}` ? -Infinity : value;

export function loadKeepsake(dir: string): Keepsake | null {
	const path = join(dir, FILE);
	if (!existsSync(path)) return null;
	return JSON.parse(readFileSync(path, 'utf8'), decode) as Keepsake;
}

/** Written beside and renamed over, so that a kill leaves the old or the new one, never half. */
export function saveKeepsake(dir: string, keepsake: Keepsake): void {
	mkdirSync(dir, { recursive: true, mode: 0o700 });
	const path = join(dir, FILE);
	writeFileSync(`${path}.new`, JSON.stringify(keepsake, encode), { mode: 0o600 });
	renameSync(`${path}.new`, path);
}

export function newKeepsake(serials: readonly string[], bornMs: number): Keepsake {
	return {
		seed: randomBytes(4).readUInt32LE(0),
		bornMs,
		toldToMs: 0,
		nodes: {},
		keys: Object.fromEntries(serials.map((serial) => [serial, randomBytes(32).toString('hex')]))
	};
}

export function keepNode(
	node: NodeState,
	keyHex: string,
	obeyed: Obeyed[],
	seqFrom: number
): KeptNode {
	return {
		keyHex,
		boot: node.boot,
		seqFrom,
		atMs: node.atMs,
		eventNext: node.eventNext,
		film: node.film,
		surroundingsMg: node.field.surroundingsMg,
		housing: node.field.pose,
		habit: node.habit,
		pulses: node.pulses,
		pulsedMs: node.pulsedMs,
		frames: node.frames,
		radioMs: node.radioMs,
		obeyed
	};
}

/** Puts what was kept back into a fresh node; it goes on from `kept.atMs`. */
export function recallNode(node: NodeState, kept: KeptNode): void {
	node.boot = kept.boot;
	node.seq = kept.seqFrom;
	node.atMs = kept.atMs;
	node.heartbeatMs = ownBeatMs(node.config.serial, kept.habit.periodS, kept.atMs);
	node.eventNext = kept.eventNext;
	node.film = kept.film;
	node.field.surroundingsMg = kept.surroundingsMg;
	node.field.pose = kept.housing;
	node.field.rotation = rotationOf(kept.housing);
	node.habit = kept.habit;
	node.pulses = kept.pulses;
	node.pulsedMs = kept.pulsedMs;
	node.frames = kept.frames;
	node.radioMs = kept.radioMs;
}
