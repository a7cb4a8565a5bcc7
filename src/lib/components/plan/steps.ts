import type { PlanLayout, Xy } from './types';

export type Direction = 'left' | 'right' | 'up' | 'down';
const UNIT: Record<Direction, Xy> = {
	left: { x: -1, y: 0 },
	right: { x: 1, y: 0 },
	up: { x: 0, y: -1 },
	down: { x: 0, y: 1 }
};
/** How much a sidestep costs against a step ahead when looking for the nearest bay that way. */
const SIDESTEP_COST = 2.5;

/** The nearest bay in a direction, or the same bay when there is none that way. */
export function nextThatWay(layout: PlanLayout, from: number, direction: Direction): number {
	const start = layout.bays[from]?.centre;
	if (start === undefined) return 0;
	const unit = UNIT[direction];
	let [best, least] = [from, Infinity];
	layout.bays.forEach(({ centre }, at) => {
		const ahead = (centre.x - start.x) * unit.x + (centre.y - start.y) * unit.y;
		const aside = Math.abs((centre.x - start.x) * unit.y - (centre.y - start.y) * unit.x);
		if (at === from || ahead <= 0.3 || aside > 2 * ahead) return;
		const cost = ahead + SIDESTEP_COST * aside;
		if (cost < least) [best, least] = [at, cost];
	});
	return best;
}

/** First or last bay of the row. */
export function rowEnd(layout: PlanLayout, from: number, end: 'first' | 'last'): number {
	const row = layout.rows[layout.rowOfBay[from] ?? 0]?.bays ?? [];
	return (end === 'first' ? row[0] : row.at(-1)) ?? from;
}

/** First bay of the next or previous zone; the same bay at either end. */
export function zoneStep(layout: PlanLayout, from: number, by: 1 | -1): number {
	const zones = [...new Set(layout.rows.map((row) => row.zone))];
	const zone = zones[zones.indexOf(layout.bays[from]?.zone ?? '') + by];
	return layout.rows.find((row) => row.zone === zone)?.bays[0] ?? from;
}

/** The next bay after `from` of a list that wraps round, in order of the layout; null of none. */
export function nextOf(list: readonly number[], from: number, by: 1 | -1): number | null {
	const sorted = [...list].sort((a, b) => a - b);
	if (by === 1) return sorted.find((at) => at > from) ?? sorted[0] ?? null;
	return sorted.findLast((at) => at < from) ?? sorted.at(-1) ?? null;
}

const bare = (code: string) => code.toUpperCase().replace(/[^A-Z0-9]/g, '');

/**
 * The first bay whose code begins with what was typed, or whose number does ('7' finds 'B-07'); dots,
 * hyphens and underscores don't matter. null when there is none.
 */
export function typedBay(layout: PlanLayout, typed: string): number | null {
	const wanted = bare(typed);
	if (wanted === '') return null;
	const codes = layout.bays.map((bay) => bare(bay.code));
	const begins = codes.findIndex((code) => code.startsWith(wanted));
	if (begins >= 0) return begins;
	const numbered = codes.findIndex((code) => code.replace(/^[^0-9]*0*/, '').startsWith(wanted));
	return numbered >= 0 ? numbered : null;
}

/** The bay under a point of the page; else the nearest centre within `reachM`. */
export function bayAt(layout: PlanLayout, p: Xy, reachM: number): number | null {
	const inside = layout.bays.findIndex((bay) => contains(bay.corners, p));
	if (inside >= 0) return inside;
	let [best, least] = [-1, reachM];
	layout.bays.forEach(({ centre }, at) => {
		const distance = Math.hypot(centre.x - p.x, centre.y - p.y);
		if (distance < least) [best, least] = [at, distance];
	});
	return best >= 0 ? best : null;
}

/** Even-odd rule: how often a ray from the point crosses the outline. */
function contains(corners: readonly Xy[], p: Xy): boolean {
	let odd = false;
	corners.forEach((a, at) => {
		const b = corners[(at + 1) % corners.length] ?? a;
		if (a.y > p.y !== b.y > p.y && p.x < ((b.x - a.x) * (p.y - a.y)) / (b.y - a.y) + a.x)
			odd = !odd;
	});
	return odd;
}
