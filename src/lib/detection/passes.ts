import type { Node } from './state';

const HIGH = 0.98;
/** Step of the running percentile as a share of itself: about 200 passes of memory. */
const RATE = 0.25;
const LEAST_MG = 5;
const MANY = 255;

/** Takes the height of a pass (a movement that came back) into the running 98th percentile. */
export function addPass(n: Node): void {
	const { fast } = n;
	const height = fast.peakMg;
	if (height < LEAST_MG) return;
	if (fast.passN === 0) fast.passMg = height;
	else if (height > fast.passMg) fast.passMg = Math.fround(fast.passMg * (1 + RATE * HIGH));
	else fast.passMg = Math.fround(fast.passMg * (1 - RATE * (1 - HIGH)));
	fast.passN = Math.min(MANY, fast.passN + 1);
}
