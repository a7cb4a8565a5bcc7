import type { PairFrame, ReadingFrame } from '$lib/wire/types';
import type { IngestRun } from './ingest-run';

/**
 * Sixty hours and more of a small fleet over the wire, physics made here and apart from src/lib/drift: a field that weakens
 * with warmth, offsets with a slope, a geomagnetic storm for all, and what befalls single nodes.
 */
export const HOUR = 3_600_000;
export const DAY = 24 * HOUR;
export const LENGTH_H = 64;
const COUNTS_PER_MG = 16.384;
const KAPPA = -0.003;
const REFERENCE_C = 15;
const ROW_MS = 300_000;
const ROWS_A_MESSAGE = 60;

type Vec = readonly [number, number, number];

export interface Fate {
	/** Film loss: share lost at the end, growing evenly from `fromH`. */
	loss?: { fromH: number; share: number };
	bridge?: { fromH: number; mg: Vec };
	steel?: { fromH: number; mg: Vec };
	pairAtH?: number;
}

const turned = ([n, e, d]: Vec, heading: number): Vec => [
	n * Math.cos(heading) + e * Math.sin(heading),
	-n * Math.sin(heading) + e * Math.cos(heading),
	d
];

export class FleetNode {
	seq = 0;
	readonly #heading: number;
	readonly #offset: Vec;
	readonly #perC: Vec;
	healed = 0;

	constructor(
		readonly i: number,
		readonly startMs: number,
		readonly fate: Fate = {}
	) {
		this.#heading = 0.7 * i;
		this.#offset = [40 * i - 100, 60 - 25 * i, 15 * i];
		this.#perC = [0.3 - 0.05 * i, 0.1, -0.2 + 0.03 * i];
	}

	tempC(atMs: number): number {
		const h = (atMs - this.startMs) / HOUR;
		return REFERENCE_C + 7 * Math.sin((2 * Math.PI * h) / 24) + 0.1 * this.i;
	}

	/** Field that a healed sensor sees, and the offset, mG. */
	#sensed(atMs: number): { field: Vec; offset: Vec } {
		const h = (atMs - this.startMs) / HOUR;
		const warmer = this.tempC(atMs) - REFERENCE_C;
		// 7 h long: whatever the hour of the run, it begins or ends within a 3-hour window of UTC.
		const storm = h >= 45 && h < 52 ? -6 : 0;
		const [x, y, z] = turned([200 + storm, 0, 430], this.#heading);
		const gain = 1 + KAPPA * warmer;
		const steel =
			this.fate.steel !== undefined && h >= this.fate.steel.fromH ? this.fate.steel.mg : [0, 0, 0];
		const bridge =
			this.fate.bridge !== undefined && h >= this.fate.bridge.fromH
				? this.fate.bridge.mg
				: [0, 0, 0];
		const of = (k: 0 | 1 | 2) => this.#offset[k] + this.#perC[k] * warmer + bridge[k];
		return {
			field: [(x + steel[0]) * gain, (y + steel[1]) * gain, (z + steel[2]) * gain],
			offset: [of(0), of(1), of(2)]
		};
	}

	lost(atMs: number): number {
		const h = (atMs - this.startMs) / HOUR;
		const { loss } = this.fate;
		if (loss === undefined || h < loss.fromH) return 0;
		return (loss.share * (h - loss.fromH)) / (LENGTH_H - loss.fromH) - this.healed;
	}

	/** Counts after SET: polarity times the film's gain times the field, and the offset. */
	counts(atMs: number, polarity: 1 | -1 = 1, film = 1 - this.lost(atMs)): [number, number, number] {
		const { field, offset } = this.#sensed(atMs);
		const of = (k: 0 | 1 | 2) => {
			const noise = Math.sin(atMs / 7919 + k + this.i) * 0.25;
			return Math.round((polarity * film * field[k] + offset[k] + noise) * COUNTS_PER_MG);
		};
		return [of(0), of(1), of(2)];
	}

	message(times: readonly number[]): ReadingFrame {
		const t = times[0] ?? 0;
		return {
			...{ kind: 'reading', boot: 1, seq: this.seq++, t, sentMs: null, unsigned: false },
			rows: times.map((atMs) => ({
				...{ dtMs: atMs - t, counts: this.counts(atMs) },
				tempDc: Math.round(this.tempC(atMs) * 10)
			})),
			...{ polarity: 1, tempDc: null, batteryMv: 3_600, rssiDbm: -70, pulse: null, tx: null }
		};
	}

	/** A pair heals the film: `before` still shows what was lost. */
	pair(atMs: number): PairFrame {
		const before = this.counts(atMs);
		this.healed += this.lost(atMs);
		const set = this.counts(atMs, 1, 1);
		return {
			...{ kind: 'pair', boot: 1, seq: this.seq++, t: atMs, sentMs: null, unsigned: false },
			...{
				set,
				reset: this.counts(atMs, -1, 1),
				before: { polarity: 1, counts: before },
				after: set
			},
			...{ tempDc: Math.round(this.tempC(atMs) * 10), batteryMv: 3_600, rssiDbm: null },
			...{ commandId: null, pulse: null }
		};
	}

	/** Messages from the placing to `toMs`, with the pairs in between. */
	story(toMs: number): (ReadingFrame | PairFrame)[] {
		const frames: (ReadingFrame | PairFrame)[] = [this.pair(this.startMs + 1_000)];
		frames.push(
			this.message(Array.from({ length: 60 }, (_, k) => this.startMs + 5_000 + k * 10_000))
		);
		const pairMs =
			this.fate.pairAtH === undefined ? Infinity : this.startMs + this.fate.pairAtH * HOUR;
		let times: number[] = [];
		const flush = () => {
			if (times.length > 0) frames.push(this.message(times));
			times = [];
		};
		let paired = false;
		for (let atMs = this.startMs + 3 * ROW_MS; atMs < toMs; atMs += ROW_MS) {
			if (!paired && atMs > pairMs) {
				flush();
				frames.push(this.pair(pairMs));
				paired = true;
			}
			times.push(atMs);
			if (times.length === ROWS_A_MESSAGE) flush();
		}
		flush();
		return frames;
	}
}

/** Everything in order of time, nodes by turns, as it would have come. */
export async function tellAll(
	run: IngestRun,
	fleet: readonly FleetNode[],
	toMs: number,
	holdBack: (i: number, t: number) => boolean
): Promise<(() => Promise<void>)[]> {
	const all = fleet
		.flatMap((node) => node.story(toMs).map((frame) => ({ node, frame })))
		.sort((a, b) => a.frame.t - b.frame.t);
	const held: (() => Promise<void>)[] = [];
	let sent: Promise<void>[] = [];
	for (const { node, frame } of all) {
		const send = async () => await run.send(run.node(node.i), frame);
		if (holdBack(node.i, frame.t)) held.push(send);
		else sent.push(send());
		if (sent.length >= 64) {
			await Promise.all(sent);
			sent = [];
		}
	}
	await Promise.all(sent);
	return held;
}
