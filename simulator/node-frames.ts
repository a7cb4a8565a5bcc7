import type { AckFrame, Counts3, FrameCommon, ReadingFrame, UpFrame } from '$lib/wire/types';
import { healFilm } from './film';
import { sample } from './node-sample';
import type { NodeState, Sent } from './node-state';

export type Out = (sent: Sent) => void;
export type PulseVerb = 'set' | 'reset' | 'pair';

/** Rows further apart than this bring a temperature each (protocol key 24). */
const TEMPS_SPAN_MS = 300_000;
/** Samples averaged before and after a pulse (protocol key 20). */
const PULSE_SAMPLES = 8;
const RADIO_MS_PER_FRAME = 55;

const onNodeClock = (node: NodeState, atMs: number): number =>
	node.config.clockOffsetMs === null ? 0 : Math.round(atMs + node.config.clockOffsetMs);

/** Key 23: a node without a clock, or one that sends the least keys, does not say when it sent. */
const sentMsOf = (node: NodeState, sentAtMs: number): number | null =>
	node.config.clockOffsetMs === null || node.config.keys === 'least'
		? null
		: onNodeClock(node, sentAtMs);

/** An optional key: null from a node that sends the least. */
const optional = <T>(node: NodeState, value: T): T | null =>
	node.config.keys === 'least' ? null : value;

function common(node: NodeState, firstAtMs: number, sentAtMs: number): FrameCommon {
	return {
		boot: node.boot,
		seq: node.seq++,
		t: onNodeClock(node, firstAtMs),
		sentMs: sentMsOf(node, sentAtMs),
		unsigned: false
	};
}

function send(
	node: NodeState,
	frame: UpFrame,
	firstAtMs: number,
	sentAtMs: number,
	out: Out
): void {
	node.frames++;
	node.radioMs += RADIO_MS_PER_FRAME;
	const { polarity } = node.film;
	out({ nodeIndex: node.config.index, frame, sentAtMs, firstAtMs, polarity });
}

export const pulseOf = (node: NodeState, atMs: number) => ({
	ageS: Math.max(0, Math.round((atMs - node.pulsedMs) / 1000)),
	count: node.pulses
});

/** A cell holds its voltage until nearly empty; cold lowers it under load. */
export function batteryMv(node: NodeState, atMs: number, tempC: number): number {
	const { battery } = node.config;
	const pastEndDays = Math.max(0, (atMs - battery.endsFromMs) / 86_400_000);
	const coldMv = tempC < 5 ? (5 - tempC) * 4 : 0;
	return Math.round(Math.max(2300, battery.fullMv - coldMv - 60 * pastEndDays));
}

export const rssiDbm = (node: NodeState): number => Math.round(-78 + 5 * node.rng.normal());

/** Sends the pending rows as one reading. */
export function flush(node: NodeState, sentAtMs: number, out: Out): void {
	const rows = node.pending;
	const last = rows[rows.length - 1];
	if (last === undefined) return;
	const { tempDc } = last;
	// Short messages carry one temperature; the rows' own would only cost bytes.
	if (last.dtMs <= TEMPS_SPAN_MS || node.config.keys === 'least')
		for (const row of rows) row.tempDc = null;
	const firstAtMs = node.pendingFromMs;
	// Written out: spreading the common keys costs ten times as much, and this is the hot path.
	const frame: ReadingFrame = {
		kind: 'reading',
		boot: node.boot,
		seq: node.seq++,
		t: onNodeClock(node, firstAtMs),
		sentMs: sentMsOf(node, sentAtMs),
		unsigned: false,
		rows,
		polarity: node.film.polarity,
		tempDc,
		batteryMv: batteryMv(node, sentAtMs, node.tempDc / 10),
		rssiDbm: optional(node, rssiDbm(node)),
		pulse: optional(node, pulseOf(node, sentAtMs)),
		tx: node.seq % 100 === 0 ? optional(node, { frames: node.frames, radioMs: node.radioMs }) : null
	};
	node.pending = [];
	send(node, frame, firstAtMs, sentAtMs, out);
}

const measure = (node: NodeState, atMs: number): Counts3 => sample(node, atMs, PULSE_SAMPLES);

/** Fires the pulses of a verb and sends `up/pair` for a pair; for set and reset the caller's ack carries before and after. */
export function firePulse(
	node: NodeState,
	verb: PulseVerb,
	atMs: number,
	commandId: Uint8Array | null,
	out: Out
): Pick<AckFrame, 'before' | 'after'> {
	flush(node, atMs, out);
	const held = node.film.polarity;
	const before = measure(node, atMs);
	healFilm(node.film, verb === 'reset' ? -1 : 1);
	const set = measure(node, atMs);
	let after = set;
	node.pulses += verb === 'pair' ? 3 : 1;
	node.pulsedMs = atMs;
	if (verb === 'pair') {
		healFilm(node.film, -1);
		const reset = measure(node, atMs);
		healFilm(node.film, 1);
		after = measure(node, atMs);
		const frame: UpFrame = {
			...common(node, atMs, atMs),
			kind: 'pair',
			set,
			reset,
			before: optional(node, { polarity: held, counts: before }),
			after: optional(node, after),
			tempDc: node.tempDc,
			batteryMv: batteryMv(node, atMs, node.tempDc / 10),
			commandId,
			pulse: optional(node, pulseOf(node, atMs)),
			rssiDbm: optional(node, rssiDbm(node))
		};
		send(node, frame, atMs, atMs, out);
	}
	node.published = measure(node, atMs);
	return {
		before: optional(node, { polarity: held, counts: before }),
		after: optional(node, after)
	};
}

/** The answer to a command (protocol, `up/ack`). */
export function sendAck(
	node: NodeState,
	atMs: number,
	commandId: Uint8Array,
	answer: Pick<AckFrame, 'outcome' | 'reason' | 'before' | 'after'>,
	out: Out
): void {
	const frame: UpFrame = {
		...common(node, atMs, atMs),
		kind: 'ack',
		commandId,
		...answer,
		pulse: optional(node, pulseOf(node, atMs)),
		habit: optional(node, { periodS: node.habit.periodS, deltaMg: node.habit.deltaMg }),
		rssiDbm: optional(node, rssiDbm(node))
	};
	send(node, frame, atMs, atMs, out);
}

/** Starts a new boot: power-on SET with before and after, then `up/hello`. */
export function bootUp(node: NodeState, atMs: number, cause: string, out: Out): void {
	node.boot++;
	node.seq = 0;
	const before = measure(node, atMs);
	const held = node.film.polarity;
	healFilm(node.film, 1);
	const after = measure(node, atMs);
	node.pulses = 1;
	node.pulsedMs = atMs;
	node.frames = 0;
	node.radioMs = 0;
	node.burst = null;
	const frame: UpFrame = {
		...common(node, atMs, atMs),
		kind: 'hello',
		firmware: node.config.firmware,
		profile: node.config.profileCode,
		cause,
		tempDc: node.tempDc,
		batteryMv: batteryMv(node, atMs, node.tempDc / 10),
		// A watchdog keeps memory, so the node still knows its polarity; after lost power it does not.
		before: optional(node, { polarity: cause === 'watchdog' ? held : 0, counts: before }),
		after: optional(node, after),
		pulse: optional(node, pulseOf(node, atMs)),
		habit: optional(node, { periodS: node.habit.periodS, deltaMg: node.habit.deltaMg }),
		tx: optional(node, { frames: 0, radioMs: 0 }),
		rssiDbm: optional(node, rssiDbm(node))
	};
	send(node, frame, atMs, atMs, out);
	node.published = measure(node, atMs);
	node.heartbeatMs = Math.round(atMs + 500);
}
