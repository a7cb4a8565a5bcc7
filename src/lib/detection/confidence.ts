import { onMg } from './thresholds';
import type { Node, Step } from './state';

/** Grades of belief, set against the simulator's truth on seeds kept for fitting (accuracy README). */
const GRADES = {
	clear: 0.99,
	plain: 0.97,
	weak: 0.9,
	faint: 0.8,
	gapFactor: 0.96,
	neighbourFactor: 0.95,
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

export function arrivalConfidence(n: Node, step: Step, dMg: number, neighbours: number): number {
	let c = byMargin(dMg / onMg(n));
	if (step.gapS > 0) c *= GRADES.gapFactor;
	if (neighbours > 0) c *= GRADES.neighbourFactor;
	return Math.max(GRADES.least, Math.min(c, capOf(n)));
}

/** restRatio: what is left of the disturbance as a share of the release threshold. */
export function departureConfidence(n: Node, step: Step, restRatio: number): number {
	let c = restRatio < 0.5 ? GRADES.clear : restRatio < 1 ? GRADES.plain : GRADES.weak;
	if (step.gapS > 0) c *= GRADES.gapFactor;
	return Math.max(GRADES.least, Math.min(c, capOf(n)));
}

export const aisleConfidence = (n: Node): number => Math.min(GRADES.aisle, capOf(n));
export const toldConfidence = 0.5;
export const seenConfidence = 0.99;
/** A state carried over a silence, a pulse or a closure. */
export const carriedConfidence = (n: Node): number => Math.min(GRADES.plain, capOf(n));
