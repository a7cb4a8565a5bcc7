import { apart } from './vec';
import type { Node, Step } from './state';
import { offMg, onMg } from './thresholds';

/**
 * Grades of belief: shares that came true on seeds kept for fitting (2 to 17 over fifteen lines), rounded
 * down; tests/accuracy and the bench hold them against other seeds. What the method says 'at most' of is a cap.
 */
const GRADES = {
	clear: 0.995,
	plain: 0.985,
	weak: 0.97,
	faint: 0.95,
	gapFactor: 0.99,
	/** While a step away from this state is seen or waits for its neighbours: it came true in 0.3 to 0.5. */
	moving: 0.37,
	/** While the level itself speaks against the state: 0.3 to 0.4 came true. */
	doubted: 0.37,
	aisle: 0.6,
	provisional: 0.9,
	least: 0.5
} as const;

const CLEAR_RATIO = 3;
const PLAIN_RATIO = 1.7;
const WEAK_RATIO = 1.25;

function byMargin(ratio: number): number {
	if (ratio >= CLEAR_RATIO) return GRADES.clear;
	if (ratio >= PLAIN_RATIO) return GRADES.plain;
	return ratio >= WEAK_RATIO ? GRADES.weak : GRADES.faint;
}

/** Cap of a node's confidence: a provisional reference, a re-anchoring under a vehicle. */
export function capOf(n: Node): number {
	const provisional = n.slow.reference?.provisional === true ? GRADES.provisional : 1;
	return Math.min(provisional, n.slow.cap);
}

export function arrivalConfidence(n: Node, step: Step, dMg: number): number {
	let c = byMargin(dMg / onMg(n));
	if (step.gapS > 0) c *= GRADES.gapFactor;
	return Math.max(GRADES.least, Math.min(c, capOf(n)));
}

/** restRatio: what is left of the disturbance as a share of the release threshold. */
export function departureConfidence(n: Node, step: Step, restRatio: number): number {
	let c = restRatio < 0.5 ? GRADES.clear : restRatio < 1 ? GRADES.plain : GRADES.weak;
	if (step.gapS > 0) c *= GRADES.gapFactor;
	return Math.max(GRADES.least, Math.min(c, capOf(n)));
}

export const toldConfidence = 0.5;
export const seenConfidence = 0.99;
/** A state carried over a silence, a pulse or a closure. */
export const carriedConfidence = (n: Node): number => Math.min(GRADES.plain, capOf(n));

export const SLOW_CROSSING = 'the field crossed the threshold slowly';
export const HOLDS_VEHICLE = 'reference may hold a vehicle';

/** Doubts that speak against the state itself; others say why to look, and their states came true. */
function isDoubted({ slow }: Node): boolean {
	const reason = slow.doubt?.reason;
	return reason === HOLDS_VEHICLE || (reason === SLOW_CROSSING && slow.state === 'vacant');
}

/** A step away from the state: settled but not decided, or still moving by what could be a vehicle. */
export function isMoving(n: Node): boolean {
	const { fast, slow } = n;
	return slow.pending !== null || (fast.open === 1 && apart(fast.last, fast.level) >= offMg(n));
}

/** How sure the state is at this moment: as it was entered, less what has been seen since. */
export function presentConfidence(n: Node): number {
	const { slow } = n;
	let c = Math.min(slow.confidence, capOf(n));
	if (slow.aisle !== null) c = Math.min(c, GRADES.aisle);
	if (isDoubted(n)) c = Math.min(c, GRADES.doubted);
	return isMoving(n) ? Math.min(c, GRADES.moving) : c;
}
