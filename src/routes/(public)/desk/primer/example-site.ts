import type { BayItem, BayOutline } from '$lib/components/plan/types';

/** A made-up site for the primer: `rows` rows of `perRow` bays of 2.5 m by 5 m with aisles of 6 m. */
export function exampleSite(
	rows: number,
	perRow: number
): { outlines: BayOutline[]; items: BayItem[] } {
	const outlines: BayOutline[] = [];
	const items: BayItem[] = [];
	const [sin, cos] = [Math.sin(0.3), Math.cos(0.3)];
	const point = (x: number, y: number): [number, number] => [
		10 + (x * cos + y * sin) / 68_678,
		52 + (-x * sin + y * cos) / 111_267
	];
	for (let row = 0; row < rows; row += 1) {
		const y = -(Math.floor(row / 2) * 16 + (row % 2) * 11);
		for (let at = 0; at < perRow; at += 1) {
			const x = at * 2.5;
			const code = `${String.fromCharCode(65 + (row % 26))}${String(at + 1).padStart(2, '0')}`;
			const ring = [
				point(x, y),
				point(x + 2.5, y),
				point(x + 2.5, y + 5),
				point(x, y + 5),
				point(x, y)
			];
			const zone = row < rows / 2 ? 'north' : 'south';
			outlines.push({ code: rows > 26 ? `${row}-${at}` : code, zone, ring });
			items.push(exampleBay(rows > 26 ? `${row}-${at}` : code, zone, row * perRow + at));
		}
	}
	return { outlines, items };
}

const SINCE = '2026-03-03T07:55:00.000Z';

function exampleBay(code: string, zone: string, at: number): BayItem {
	const roll = (at * 7919) % 100;
	const state = roll < 55 ? 'occupied' : roll < 90 ? 'vacant' : 'unknown';
	return {
		code,
		zone,
		state,
		since: SINCE,
		confidence: state === 'unknown' ? null : 0.95,
		doubt: roll === 20 ? { reason: 'reference may hold a vehicle', since: SINCE } : null,
		condition: roll === 95 ? 'withdrawn' : state === 'unknown' ? 'silent' : 'in_service',
		also: [],
		lastKnown: state === 'unknown' ? { state: 'occupied', at: SINCE } : null,
		closed:
			roll === 60 ? { from: SINCE, to: '2099-01-01T00:00:00.000Z', reason: 'kerb works' } : null,
		node: `NODE-${at}`
	};
}
