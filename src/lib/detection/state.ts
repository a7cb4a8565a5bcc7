import type {
	BayState,
	Evidence,
	GroupMember,
	HistoryType,
	LearnedReference,
	Outcome
} from './types';
import type { Params } from './params';
import { view3, type V3 } from './vec';

export type Triple = [number, number, number];

const VECTORS = 8;
/** Median |difference| of a sensor of 0.6 mG rms: where the running estimate begins. */
const USUAL_NOISE_MG = 0.6;

/**
 * What changes with every row. Vectors are float32 in one buffer; scalars listed in codec.ts are held
 * in float32 by Math.fround where they are set, so that storing and loading changes nothing.
 * Times are UTC ms, 0 = none.
 */
export class Fast {
	readonly buffer = new Float32Array(VECTORS * 3);
	/** Running quiet field b, mG. */
	readonly baseline: V3 = view3(this.buffer, 0);
	/** The still level the field stands on, mG; frozen while a step is open. */
	readonly level: V3 = view3(this.buffer, 3);
	readonly last: V3 = view3(this.buffer, 6);
	/** Box of the readings since the field last moved, and their sum. */
	readonly boxMin: V3 = view3(this.buffer, 9);
	readonly boxMax: V3 = view3(this.buffer, 12);
	readonly boxSum: V3 = view3(this.buffer, 15);
	/** Running median of |successive difference| per axis, mG. */
	readonly noise: V3 = view3(this.buffer, 18);
	/** Site's geomagnetic change when last told, (h, e, z), mG. */
	readonly site: V3 = view3(this.buffer, 21);

	constructor() {
		for (const i of [0, 1, 2] as const) this.noise[i] = USUAL_NOISE_MG;
	}

	lastAtMs = 0;
	boxFromMs = 0;
	/** The last reading on the old level and the first off it. */
	openOldAtMs = 0;
	openNewAtMs = 0;
	/** First crossing of the threshold within the open step. */
	crossAtMs = 0;
	/** The reading before the crossing: how sharply its time is known. */
	crossOldAtMs = 0;
	/** No step is judged before this time (pulses). */
	quietUntilMs = 0;
	clippedFromMs = 0;
	/** When housekeeping must look again. */
	checkAtMs = 0;
	/** When the next hourly sample is due. */
	nextHourMs = 0;
	/** Newest decision that read or wrote this node. */
	decidedAtMs = 0;
	/** Newest change of what neighbours see of this node: a step opened, settled, passed or decided. */
	visibleAtMs = 0;

	/** Smoothed temperature and the one the baseline stands at, °C; NaN = not known. */
	tempC = NaN;
	baselineTempC = NaN;
	/** Running median of the disturbance in this stay, mG. */
	stayMg = 0;
	/** Largest distance from the old level within the open step, mG. */
	peakMg = 0;
	/** Running 98th percentile of the heights of passes, mG, and how many it has seen (to 255). */
	passMg = 0;
	passN = 0;
	boxN = 0;
	levelN = 0;
	openN = 0;
	/** Still readings yet to be averaged into a new baseline. */
	rebase = 0;
	open = 0;
	openGap = 0;
	openClipped = 0;
	/** The open step has been near the baseline. */
	openLow = 0;
	clippedRun = 0;
	/** Polarity of the last row. */
	polarity = 1;
	/** 1 = the level after a pulse is still to be taken, its jump being the film's. */
	reanchor = 0;
}

/** A change between two still levels. */
export interface Step {
	j: Triple;
	/** Bracket of the movement. */
	fromMs: number;
	toMs: number;
	/** First reading off the old level. */
	newMs: number;
	/** Seen as it moved: its bracket is sharp. */
	burst: boolean;
	atMs: number;
	uncertaintyS: number;
	settledMs: number;
	/** Silence it happened in, s; 0 = none. */
	gapS: number;
	riseS: number;
	/** Largest distance from the old level on the way, mG. */
	peakMg: number;
	clipped: boolean;
	became: 'pending' | 'nothing' | 'arrival' | 'departure' | 'echo' | 'aisle' | 'film';
	/** State before it, to be put back when it proves an echo. */
	before: Before | null;
}

export interface Before {
	state: BayState;
	sinceMs: number | null;
	confidence: number;
	arrival: Arrival | null;
	baseline: Triple;
	evidence: Evidence;
}

export interface Arrival {
	/** Sum of the steps since the bay was empty, mG. */
	step: Triple;
	/** Disturbance just after the arrival, mG. */
	first: Triple;
	atMs: number;
}

/** A step held for a neighbour's, until that is undone. */
export interface Echo {
	by: number;
	j: Triple;
	byJ: Triple;
	atMs: number;
	uncertaintyS: number;
	settledMs: number;
	/** Set when the neighbour's step was undone: look again after this time. */
	checkAfterMs: number;
}

export interface Aisle {
	step: Step;
	/** The node of the row that felt a like step; null = told by the node's own field alone. */
	by: number | null;
	byJ: Triple;
	deadlineMs: number;
}

export interface Reference extends LearnedReference {
	acceptedAtMs: number;
	provisional: boolean;
}

export interface SettleUndo {
	actId: number;
	atMs: number;
	as: string;
	before: Before;
	doubt: { reason: string; sinceMs: number } | null;
	/** slow.entries just after it. */
	entries: number;
}

/** A field that a provisional reference lacks and that keeps coming back (provisional.ts). */
export interface Strange {
	visits: number;
	/** Sum of the steps since it was left; null while the field stands on it. */
	out: Triple | null;
	/** How the first visit changed the field, in float32; a later one that differs shows that these are vehicles. */
	first: Triple | null;
	differ: boolean;
	moves: { to: 'empty' | 'taken'; atMs: number; uncertaintyS: number }[];
	/** What history was told since it was first seen. */
	entries: { type: HistoryType; atMs: number }[];
}

/** A departure that did not quite fit: what the bay would hold, were it none (afterthought.ts). In float32. */
export interface Parted {
	atMs: number;
	j: Triple;
	arrival: Arrival;
	/** The baseline of before less the level that was taken for it. */
	back: Triple;
	/** slow.entries just after it. */
	entries: number;
}

/** A step that a film could have made alone, and what was held before it (film-suspect.ts). */
export interface Suspect {
	j: Triple;
	atMs: number;
	became: 'nothing' | 'arrival';
	arrival: Arrival | null;
	sinceMs: number | null;
	/** slow.entries just after it. */
	entries: number;
}

/** A magnet's step, and what was known before it. */
export interface Magnet {
	atMs: number;
	uncertaintyS: number;
	signs: Triple;
	baseline: Triple;
	j: Triple;
}

/** Slope of the field over temperature, per axis, with standard error. */
export interface Slope {
	k: Triple;
	se: Triple;
	triples: number;
}

/** Still levels of past hours: [atMs, tempC, x, y, z, stay], stay 0 = vacant. */
export type HourSample = [number, number, number, number, number, number];

/** What changes with decisions only; plain JSON but for the arrays that codec.ts packs. */
export interface Slow {
	revision: number;
	state: BayState;
	sinceMs: number | null;
	confidence: number;
	lastKnown: { state: BayState; atMs: number } | null;
	/** Why the state is unknown: silence ends by itself, the others do not. */
	unknownWhy: 'new' | 'silent' | 'clipped' | null;
	doubt: { reason: string; sinceMs: number } | null;
	evidence: Evidence;
	offset: Triple | null;
	/** What each axis is multiplied by: 1, -1 where the film has flipped, 1/gain after a magnet. */
	signs: Triple;
	magnet: Magnet | null;
	learning: boolean;
	preCommissioned: boolean;
	candidate: LearnedReference | null;
	reference: Reference | null;
	returns: number;
	strange: Strange | null;
	arrival: Arrival | null;
	parted: Parted | null;
	suspect: Suspect | null;
	steps: Step[];
	pending: Step | null;
	pendDeadlineMs: number;
	echoes: Echo[];
	aisle: Aisle | null;
	refreshWhy: string | null;
	slope: Slope | null;
	settle: SettleUndo | null;
	closedUntilMs: number;
	longCheckMs: number;
	longAsked: boolean;
	longStay: boolean;
	stayNo: number;
	lastPulseMs: number;
	/** Confidence cap after a re-anchoring under a vehicle. */
	cap: number;
	/** Learning window, flat xyz, with its times. */
	window: number[];
	windowAtMs: number[];
	/** Stays by length: counts in half-octaves from 1 min. */
	stays: number[];
	hours: HourSample[];
	/** Hours sampled so far. */
	sampled: number;
	/** Entries so far: a settlement can be undone while it is the newest. */
	entries: number;
}

export interface Node {
	readonly id: number;
	member: GroupMember;
	params: Params;
	/** Within neighbourM. */
	near: Node[];
	/** Others of the same row. */
	mates: Node[];
	fast: Fast;
	slow: Slow;
}

export interface Group {
	nodes: Node[];
	byId: Map<number, Node>;
	/** Outcomes of the item being advanced. */
	out: Outcome[];
	/** Open or pending steps; 0 = quiet. */
	active: number;
}

export function newSlow(): Slow {
	return {
		revision: 0,
		state: 'unknown',
		sinceMs: null,
		confidence: 0,
		lastKnown: null,
		unknownWhy: 'new',
		doubt: null,
		evidence: { because: [], against: [] },
		offset: null,
		signs: [1, 1, 1],
		magnet: null,
		learning: false,
		preCommissioned: false,
		candidate: null,
		reference: null,
		returns: 0,
		strange: null,
		arrival: null,
		parted: null,
		suspect: null,
		steps: [],
		pending: null,
		pendDeadlineMs: 0,
		echoes: [],
		aisle: null,
		refreshWhy: null,
		slope: null,
		settle: null,
		closedUntilMs: 0,
		longCheckMs: 0,
		longAsked: false,
		longStay: false,
		stayNo: 0,
		lastPulseMs: 0,
		cap: 1,
		window: [],
		windowAtMs: [],
		stays: [],
		hours: [],
		sampled: 0,
		entries: 0
	};
}

export const triple = (a: Readonly<{ 0: number; 1: number; 2: number }>): Triple => [
	a[0],
	a[1],
	a[2]
];

/** In float32, which takes half the room in stored state. */
export const floats = (a: Triple): Triple => [
	Math.fround(a[0]),
	Math.fround(a[1]),
	Math.fround(a[2])
];

export const summed = (a: Triple, b: Triple): Triple => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];

/** Why a film refresh is due after a clipped row, or one past what the film bears. */
export const STRONG_FIELD = 'a strong field met the film';

/** Marks the slow state as changed. */
export function touch(n: Node): void {
	n.slow.revision++;
}
