import { enter } from './entries';
import { evidence, spanWords } from './evidence';
import { believeAgain } from './judge';
import { resolve } from './neighbours';
import { STRONG_FIELD, touch, type Group, type Node } from './state';

const MS_PER_S = 1000;
/** One clipped reading is an accident; two are a state (method 1). */
const CLIPPED_READINGS = 2;

/** A row at the end of the range is worth as many rows past the film's limit. */
const CLIPPED_COUNTS_AS = 3;
const MANY = 250;

/** A row after a silence that hides how the field moved; over the grace time the state was unknown. */
export function atSilence(g: Group, n: Node, atMs: number, dtMs: number): void {
	const { fast, slow } = n;
	if (slow.pending !== null) resolve(g, n, atMs, 'forced');
	if (fast.open === 1) fast.openGap = 1;
	const graceMs = n.member.graceS * MS_PER_S;
	if (dtMs <= graceMs || slow.state === 'unknown') return;
	enter(
		g,
		n,
		{
			type: 'unknown',
			state: 'unknown',
			atMs: fast.lastAtMs + graceMs,
			uncertaintyS: 0,
			confidence: 0,
			evidence: evidence([`not heard for ${spanWords(dtMs / MS_PER_S)}`])
		},
		atMs
	);
	slow.unknownWhy = 'silent';
}

/** The field stands where it stood before the state became unknown. */
export function heardAgain(g: Group, n: Node, atMs: number): void {
	if (n.slow.unknownWhy === 'new') return;
	believeAgain(g, n, null, atMs, atMs);
}

/** A row at the end of the range or past what the film bears: the field is not known, a step is open. */
export function takeClipped(g: Group, n: Node, atMs: number, clipped: boolean): void {
	const { fast, slow } = n;
	if (slow.reference === null || fast.levelN === 0) return;
	if (slow.refreshWhy === null) {
		// Whatever it leaves behind, and for however short a time (method 6).
		slow.refreshWhy = STRONG_FIELD;
		touch(n);
	}
	if (fast.open === 0) {
		if (slow.pending !== null) resolve(g, n, atMs, 'forced');
		fast.open = 1;
		fast.openOldAtMs = fast.lastAtMs;
		fast.openNewAtMs = atMs;
		fast.openGap = 0;
		fast.openN = 0;
		fast.openClipped = 0;
		fast.peakMg = 0;
		fast.crossAtMs = 0;
		fast.visibleAtMs = atMs;
		g.active++;
	}
	fast.openN++;
	fast.openClipped = Math.min(MANY, fast.openClipped + (clipped ? CLIPPED_COUNTS_AS : 1));
	fast.boxN = 0;
	if (!clipped) return;
	if (fast.clippedRun === 0) fast.clippedFromMs = atMs;
	fast.clippedRun = Math.min(CLIPPED_READINGS, fast.clippedRun + 1);
	const lasts = atMs - fast.clippedFromMs >= n.params.clippedUnknownS * MS_PER_S;
	if (fast.clippedRun < CLIPPED_READINGS || !lasts || slow.state === 'unknown') return;
	enter(
		g,
		n,
		{
			type: 'unknown',
			state: 'unknown',
			atMs: fast.clippedFromMs,
			uncertaintyS: 1,
			confidence: 0,
			evidence: evidence(['a magnet or steel overloads the sensor'])
		},
		atMs
	);
	slow.unknownWhy = 'clipped';
}
