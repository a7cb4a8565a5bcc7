import type { PlacedBay, PlanRow } from './types';

/** How far bays of one row may lie from each other, in shares of a bay's own size. */
const SIDE_REACH = 2.3;
const SIDE_STAGGER = 0.65;
const END_REACH = 1.8;
const END_STAGGER = 0.5;
const SAME_DIRECTION_RAD = 0.3;
/** Only bays within this many metres are compared: twice the length of a coach bay. */
const CELL_M = 30;

/**
 * Bays that stand in one row: side by side within a zone, or end to end (kerbside) where neither has a
 * neighbour at its side. Rows are numbered per zone from top to bottom, then from left to right.
 */
export function rowsOf(bays: readonly PlacedBay[]): PlanRow[] {
	const parent = bays.map((_, at) => at);
	const root = (at: number): number => {
		let top = at;
		while (parent[top] !== top) top = parent[top] ?? top;
		parent[at] = top;
		return top;
	};
	const join = (a: number, b: number) => (parent[root(a)] = root(b));
	const near = nearPairs(bays);
	const sides = near.filter(([a, b]) => relation(bays, a, b) === 'side');
	const sided = new Set(sides.flat());
	sides.forEach(([a, b]) => join(a, b));
	near
		.filter(([a, b]) => !sided.has(a) && !sided.has(b) && relation(bays, a, b) === 'end')
		.forEach(([a, b]) => join(a, b));

	const groups = new Map<number, number[]>();
	bays.forEach((_, at) => {
		const key = root(at);
		groups.set(key, [...(groups.get(key) ?? []), at]);
	});
	return numbered(
		[...groups.values()].map((group) => ordered(bays, group)),
		bays
	);
}

function relation(bays: readonly PlacedBay[], a: number, b: number): 'side' | 'end' | null {
	const [p, q] = [bays[a], bays[b]];
	if (p === undefined || q === undefined || p.zone !== q.zone) return null;
	const turn = Math.abs(p.longAngle - q.longAngle);
	if (Math.min(turn, Math.PI - turn) > SAME_DIRECTION_RAD) return null;
	const [dx, dy] = [q.centre.x - p.centre.x, q.centre.y - p.centre.y];
	const [sin, cos] = [Math.sin(p.longAngle), Math.cos(p.longAngle)];
	const alongLong = Math.abs(dx * cos + dy * sin);
	const alongShort = Math.abs(dy * cos - dx * sin);
	const [short, long] = [Math.max(p.shortM, q.shortM), Math.max(p.longM, q.longM)];
	if (alongShort <= SIDE_REACH * short && alongLong <= SIDE_STAGGER * long) {
		// Bays that hold almost the same place are no row (storeys drawn on one another).
		return alongShort > 0.3 * short ? 'side' : null;
	}
	return alongLong <= END_REACH * long && alongShort <= END_STAGGER * short ? 'end' : null;
}

function nearPairs(bays: readonly PlacedBay[]): [number, number][] {
	const cells = new Map<string, number[]>();
	const cell = (v: number) => Math.floor(v / CELL_M);
	const pairs: [number, number][] = [];
	bays.forEach((bay, at) => {
		const [cx, cy] = [cell(bay.centre.x), cell(bay.centre.y)];
		for (let x = cx - 1; x <= cx + 1; x += 1)
			for (let y = cy - 1; y <= cy + 1; y += 1)
				for (const other of cells.get(`${x} ${y}`) ?? []) pairs.push([other, at]);
		const key = `${cx} ${cy}`;
		cells.set(key, [...(cells.get(key) ?? []), at]);
	});
	return pairs;
}

/** Along the row's own direction, starting at its left or, when it stands upright, at its top. */
function ordered(bays: readonly PlacedBay[], group: readonly number[]): number[] {
	const centres = group.map((at) => bays[at]?.centre ?? { x: 0, y: 0 });
	const spread = (values: number[]) => Math.max(...values) - Math.min(...values);
	const upright = spread(centres.map((c) => c.y)) > spread(centres.map((c) => c.x));
	const place = (at: number) => (upright ? (bays[at]?.centre.y ?? 0) : (bays[at]?.centre.x ?? 0));
	return [...group].sort((a, b) => place(a) - place(b));
}

function numbered(groups: number[][], bays: readonly PlacedBay[]): PlanRow[] {
	const first = (group: number[]) => bays[group[0] ?? 0];
	const sorted = [...groups].sort((a, b) => {
		const [p, q] = [first(a), first(b)];
		if (p === undefined || q === undefined) return 0;
		if (p.zone !== q.zone) return p.zone < q.zone ? -1 : 1;
		const dy = p.centre.y - q.centre.y;
		return Math.abs(dy) > 1 ? dy : p.centre.x - q.centre.x;
	});
	const counts = new Map<string, number>();
	return sorted.map((group) => {
		const zone = first(group)?.zone ?? '';
		const number = (counts.get(zone) ?? 0) + 1;
		counts.set(zone, number);
		return { zone, number, bays: group };
	});
}
