import { touch, type Node } from './state';

const MINUTE_MS = 60_000;
const DAY_MS = 86_400_000;
const CLASSES = 36;
/** Half-octaves of minutes: class c holds stays up to 2^(c/2) min. */
const lengthClass = (ms: number): number =>
	Math.max(0, Math.min(CLASSES - 1, Math.ceil(2 * Math.log2(Math.max(1, ms / MINUTE_MS)))));
const classEndMs = (c: number): number => MINUTE_MS * 2 ** (c / 2);

/** Old stays fade so that the histogram covers some 90 days: halved when it holds this many. */
const FULL = 2000;

/** Enters the stay that ends now in the bay's histogram of lengths. */
export function addStay(n: Node, untilMs: number): void {
	const { slow } = n;
	if (slow.arrival === null) return;
	const c = lengthClass(untilMs - slow.arrival.atMs);
	while (slow.stays.length <= c) slow.stays.push(0);
	slow.stays[c] = (slow.stays[c] ?? 0) + 1;
	const total = slow.stays.reduce((sum, k) => sum + k, 0);
	if (total > FULL) slow.stays = slow.stays.map((k) => Math.floor(k / 2));
	touch(n);
}

const P99 = 0.99;
/** Fewer stays say nothing of the longest hundredth. */
const ENOUGH = 20;

/** 99th percentile of this bay's stays (upper end of its half-octave), ms; 0 with too few. */
export function longStayPercentileMs(n: Node): number {
	const { stays } = n.slow;
	const total = stays.reduce((sum, k) => sum + k, 0);
	if (total < ENOUGH) return 0;
	let below = 0;
	for (const [c, k] of stays.entries()) {
		below += k;
		if (below >= P99 * total) return classEndMs(c);
	}
	return 0;
}

const HOUR_MS = 3_600_000;

/** When a stay is held against its arrival (method 4, long stay), ms after it began. */
export function longStayAfterMs(n: Node): number {
	const { longStayH, longStayFactor, longStayMaxH } = n.params;
	const usual = longStayFactor * longStayPercentileMs(n);
	return Math.min(longStayMaxH * HOUR_MS, Math.max(longStayH * HOUR_MS, usual));
}

/** A confirmed long stay is looked at again after a day. */
export const LONG_AGAIN_MS = DAY_MS;
