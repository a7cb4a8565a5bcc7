import type { PublishedChange } from './method';

/** Our own on, off and hold, so that a fixed threshold differs from ours only in what it knows. */
const ON_MG = 35;
const OFF_MG = 25;
const HOLD_MS = 3000;

/** A threshold with hysteresis that must hold for 3 s; the change is told at its first crossing. */
export function heldThreshold(): (atMs: number, dMg: number) => PublishedChange | null {
	let taken = false;
	let crossedMs: number | null = null;
	return (atMs, dMg) => {
		const crossed = taken ? dMg < OFF_MG : dMg >= ON_MG;
		if (!crossed) {
			crossedMs = null;
			return null;
		}
		crossedMs ??= atMs;
		if (atMs - crossedMs < HOLD_MS) return null;
		const change = { type: taken ? 'departure' : 'arrival', atMs: crossedMs } as const;
		taken = !taken;
		crossedMs = null;
		return change;
	};
}
