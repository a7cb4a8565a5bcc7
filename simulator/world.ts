import { earthField, decimalYear } from '$lib/magnetics/earth-field';
import type { Vec3 } from '$lib/magnetics/vector';
import type { GeomagneticSeries } from './geomagnetic';
import type { Motion, Standing } from './motion';
import { addMotion, addStanding, nodeField, type NodeField } from './node-field';
import { random } from './random';
import { motionsOf, type Visit } from './schedule';
import type { Lane, SitePlan } from './site-plan';
import type { Incident, Stay } from './truth';

/** A site's true field: one `NodeField` a node, fed with every vehicle that comes near. */
export interface World {
	plan: SitePlan;
	earthMg: Vec3;
	earthUnit: Vec3;
	fields: NodeField[];
	/** Node of each bay (one to a bay). */
	nodeOfBay: number[];
}

/** Reinforcement and pipes bend the field at each place by up to this share of it. */
const LOCAL_STEEL_SHARE = 0.04;
/** Smaller things than this explain no miss and are not noted. */
const NOTED_MG = 4;
const RADIANS = Math.PI / 180;

/** The recorded variation is along magnetic north: turned by the place's declination. */
function turned(series: GeomagneticSeries, declinationDeg: number): GeomagneticSeries {
	const [sine, cosine] = [Math.sin(declinationDeg * RADIANS), Math.cos(declinationDeg * RADIANS)];
	return {
		startMs: series.startMs,
		north: series.north.map((n, i) => n * cosine - series.east[i]! * sine),
		east: series.north.map((n, i) => n * sine + series.east[i]! * cosine),
		down: series.down
	};
}

export function makeWorld(
	plan: SitePlan,
	variation: GeomagneticSeries,
	atMs: number,
	seed: number
): World {
	const earth = earthField(plan.latDeg, plan.lonDeg, plan.altitudeM / 1000, decimalYear(atMs));
	const earthMg: Vec3 = [earth.xMg, earth.yMg, earth.zMg];
	const geographic = turned(variation, earth.declinationDeg);
	const fields = plan.nodes.map((node, i) => {
		const rng = random(seed, 'steel', i);
		const bent = earthMg.map(
			(b) => b + earth.totalMg * LOCAL_STEEL_SHARE * rng.normal()
		) as unknown as Vec3;
		return nodeField(node, bent, geographic);
	});
	const nodeOfBay: number[] = [];
	plan.nodes.forEach((node, i) => (nodeOfBay[node.bayIndex] = i));
	return {
		plan,
		earthMg,
		earthUnit: earthMg.map((b) => b / earth.totalMg) as unknown as Vec3,
		fields,
		nodeOfBay
	};
}

/** Where the nodes of a lane's row lie, [north, east, down] m. */
export const laneNodesNedM = (world: World, lane: Lane): Vec3[] =>
	world.fields
		.filter((_, i) => world.plan.bays[world.plan.nodes[i]!.bayIndex]!.row === lane.row)
		.map((field) => field.positionNedM);

/** Puts a visit into every node's field; returns the stay and its echoes at other nodes. */
export function addVisit(world: World, visit: Visit): { stay: Stay; echoes: Incident[] } {
	const { moves, standing } = motionsOf(visit);
	const echoes: Incident[] = [];
	let sizeMg = 0;
	world.fields.forEach((field, nodeIndex) => {
		for (const move of moves) addMotion(field, move);
		const mg = addStanding(field, standing);
		if (nodeIndex === world.nodeOfBay[visit.bayIndex]) sizeMg = mg;
		else if (mg > NOTED_MG) {
			echoes.push({ nodeIndex, kind: 'echo', atMs: visit.fromMs, toMs: visit.toMs, mg });
		}
	});
	const { bayIndex, fromMs, toMs, leftM } = visit;
	return { stay: { bayIndex, fromMs, toMs, sizeMg, leftM }, echoes };
}

/** Puts lane traffic into every node's field; returns what of it a node could notice. */
export function addTraffic(
	world: World,
	moves: readonly Motion[],
	standings: readonly Standing[]
): Incident[] {
	const incidents: Incident[] = [];
	world.fields.forEach((field, nodeIndex) => {
		for (const move of moves) {
			const peakMg = addMotion(field, move);
			if (peakMg < NOTED_MG) continue;
			const { fromMs, toMs } = move;
			incidents.push({ nodeIndex, kind: 'pass', atMs: fromMs, toMs, mg: peakMg });
		}
		for (const standing of standings) {
			const mg = addStanding(field, standing);
			if (mg < NOTED_MG) continue;
			const { fromMs, toMs } = standing;
			incidents.push({ nodeIndex, kind: 'queue', atMs: fromMs, toMs, mg });
		}
	});
	return incidents;
}
