import { random } from './random';
import { layRow, type BayPlan, type Lane, type NodePlan, type SitePlan } from './site-plan';

/** Nodes for every bay: near the middle, at an unknown heading, a degree or two from level. */
export function plantNodes(
	bays: readonly BayPlan[],
	prefix: string,
	profileCode: string,
	seed: number
): NodePlan[] {
	return bays.map((bay, bayIndex): NodePlan => {
		const rng = random(seed, 'plant', bayIndex);
		return {
			serial: `${prefix}-${String(bayIndex + 1).padStart(4, '0')}`,
			bayIndex,
			eastM: bay.eastM + rng.between(-0.15, 0.15),
			northM: bay.northM + rng.between(-0.15, 0.15),
			headingDeg: rng.between(0, 360),
			rollDeg: rng.between(-2, 2),
			pitchDeg: rng.between(-2, 2),
			profileCode
		};
	});
}

/** Invented positions between the tropics and the subpolar circles, inclination low to steep. */
const PLACES = [
	{ latDeg: 52.41, lonDeg: 9.87, altitudeM: 55, timezone: 'Europe/Berlin' },
	{ latDeg: 38.2, lonDeg: -4.1, altitudeM: 420, timezone: 'Europe/Madrid' },
	{ latDeg: 60.9, lonDeg: 15.3, altitudeM: 140, timezone: 'Europe/Stockholm' }
] as const;

function ground(rows: ReturnType<typeof layRow>[], seed: number, name: string): SitePlan {
	const bays: BayPlan[] = rows.flatMap((row) => row.bays);
	const lanes: Lane[] = rows.map((row) => row.lane);
	const place = PLACES[random(seed, 'place').whole(0, PLACES.length - 1)]!;
	return {
		slug: name,
		name,
		...place,
		bays,
		nodes: plantNodes(bays, 'SIM', 'amr-18-16384', seed),
		lanes
	};
}

/** Three rows of bays side by side, one of them slanted: 24 bays, neighbours 2.5 m apart. */
export function lot(seed: number): SitePlan {
	const rng = random(seed, 'lot');
	const turn = rng.between(0, 360);
	const at = (row: number, noseDeg: number, alongDeg: number) =>
		layRow({
			zone: 'P',
			row: `R${row}`,
			prefix: `P${row}`,
			first: 1,
			count: 8,
			eastM: 0,
			northM: row * 75,
			alongDeg: (alongDeg + turn) % 360,
			noseDeg: (noseDeg + turn) % 360
		});
	return ground([at(1, 0, 90), at(2, 180, 90), at(3, 40, 90)], seed, 'lot');
}

/** Two kerbs with bays end to end along a street: 20 bays, traffic 3 m beside the nodes. */
export function kerb(seed: number): SitePlan {
	const rng = random(seed, 'kerb');
	const turn = rng.between(0, 360);
	const at = (row: number) =>
		layRow({
			zone: 'K',
			row: `K${row}`,
			prefix: `K${row}`,
			first: 1,
			count: 10,
			eastM: 0,
			northM: row * 130,
			alongDeg: turn,
			noseDeg: turn,
			widthM: 2.1,
			lengthM: 5.4
		});
	return ground([at(1), at(2)], seed, 'kerb');
}
