import type { Counts3, UpFrame } from '$lib/wire/types';
import { freshFilm, type Film, type NodeEvent, type Sensor } from './film';
import type { NodeField } from './node-field';
import { random, type Random } from './random';
import type { NodeCourse } from './temperature';

/** How a node puts rows into messages. */
export interface Batching {
	/** Rows to a message at most (protocol: 120). */
	rows: number;
	/** A message is sent when its first row is this old, ms. */
	holdMs: number;
}

export interface Habit {
	periodS: number;
	deltaMg: number;
}

export interface Battery {
	/** Voltage of a fresh cell at 20 °C, mV. */
	fullMv: number;
	/** From here on the cell nears its end; Infinity for a good one. */
	endsFromMs: number;
}

export interface NodeConfig {
	index: number;
	serial: string;
	profileCode: string;
	sensor: Sensor;
	course: NodeCourse;
	/** Sorted by time. */
	events: NodeEvent[];
	burstHz: number;
	habit: Habit;
	batching: Batching;
	/** Node's clock less true time, ms; null = the node has no clock. */
	clockOffsetMs: number | null;
	battery: Battery;
	firmware: string;
	/** `least`: sends none of the optional keys 8 and 20 to 26, so that they are not known (protocol). */
	keys: 'full' | 'least';
	seed: number;
}

/** A frame as the node first sent it, with the true times that the node itself may not know. */
export interface Sent {
	nodeIndex: number;
	frame: UpFrame;
	/** True time of sending and of the frame's first row or pulse, ms. */
	sentAtMs: number;
	firstAtMs: number;
	/** The film's magnetization when it was sent: after the pulse, for what answers one. */
	polarity: 1 | -1;
}

/** A row waiting for its message. */
export interface Row {
	/** After `pendingFromMs`. */
	dtMs: number;
	counts: Counts3;
	tempDc: number | null;
}

/** Everything a node remembers while it runs. */
export interface NodeState {
	config: NodeConfig;
	field: NodeField;
	film: Film;
	rng: Random;
	atMs: number;
	boot: number;
	seq: number;
	habit: Habit;
	heartbeatMs: number;
	sampledMs: number;
	/** Counts last published: what delta is measured from. */
	published: Counts3;
	burst: { anchor: Counts3; stillSinceMs: number } | null;
	/** Temperature of the last sample, 0.1 °C. */
	tempDc: number;
	/** Sampled finely until then although nothing moves (after a sudden event). */
	fineUntilMs: number;
	pending: Row[];
	pendingFromMs: number;
	eventNext: number;
	pulses: number;
	pulsedMs: number;
	frames: number;
	radioMs: number;
}

export function newNode(config: NodeConfig, field: NodeField, atMs: number): NodeState {
	const rng = random(config.seed, 'node', config.index);
	return {
		config,
		field,
		film: freshFilm(atMs),
		rng,
		atMs,
		boot: 0,
		seq: 0,
		habit: config.habit,
		heartbeatMs: Math.round(atMs + rng.between(500, config.habit.periodS * 1000)),
		sampledMs: -Infinity,
		published: [0, 0, 0],
		burst: null,
		fineUntilMs: -Infinity,
		tempDc: 0,
		pending: [],
		pendingFromMs: atMs,
		eventNext: 0,
		pulses: 0,
		pulsedMs: atMs,
		frames: 0,
		radioMs: 0
	};
}
