/**
 * A simulated site for the drift bench: hourly levels of nodes with known causes. Made apart from src/lib/drift
 * and using nothing of it, so that the bench does not grade drift with itself.
 */
import { gaussian, seeded, type Random } from '../../src/lib/numeric/random';
import { add, cross, dot, scale, type Vec3 } from '../../src/lib/magnetics/vector';

export type Injected = 'film' | 'bridge' | 'gain' | 'tilt' | 'steel';

/** One thing done to a node: grows from `startH` over `rampH` hours to its full size. */
export interface Injection {
	cause: Injected;
	startH: number;
	rampH: number;
	/** Change of offset or surroundings, mG; unused by film, gain and tilt. */
	vectorMg: Vec3;
	/** Share of gain lost (film, gain), or angle of tilt in radians. */
	amount: number;
	axis: Vec3;
}

export interface SimNode {
	random: Random;
	fieldMg: Vec3;
	offsetMg: Vec3;
	tempcoPerC: number;
	offsetPerC: Vec3;
	headingRad: number;
	warmerC: number;
	swing: number;
	/** Film share lost up to here was healed by the last pulse. */
	healedLoss: number;
	residual: Vec3;
	injection: Injection | null;
	/** End of the running stay, hours; and its name and vehicle. */
	stayToH: number;
	stay: string | null;
	vehicleMg: Vec3;
}

export interface Weather {
	tempC: number[];
	/** Geomagnetic change north, east, vertical. */
	geomagneticMg: Vec3[];
}

export const HOURS_A_DAY = 24;
const REFERENCE_C = 15;
const TAU = 2 * Math.PI;

export const unit = (random: Random): Vec3 => {
	const z = 2 * random() - 1;
	const angle = TAU * random();
	const flat = Math.sqrt(1 - z * z);
	return [flat * Math.cos(angle), flat * Math.sin(angle), z];
};

/** Rodrigues' rotation. */
export function rotate(v: Vec3, axis: Vec3, angle: number): Vec3 {
	const along = scale(axis, dot(axis, v) * (1 - Math.cos(angle)));
	return add(add(scale(v, Math.cos(angle)), scale(cross(axis, v), Math.sin(angle))), along);
}

/** Seasons, fronts of some days, days and nights; daily geomagnetic variation and some storms. */
export function weather(hours: number, seed: number): Weather {
	const random = seeded(seed);
	let front = 0;
	let amplitude = 5;
	let storm: Vec3 = [0, 0, 0];
	const tempC: number[] = [];
	const geomagneticMg: Vec3[] = [];
	for (let h = 0; h < hours; h++) {
		if (h % HOURS_A_DAY === 0) amplitude = 1 + 7 * random();
		front += -front / 60 + 0.5 * gaussian(random);
		const season = 12 * Math.sin((TAU * h) / (365 * HOURS_A_DAY));
		const day = amplitude * Math.sin((TAU * (h - 9)) / HOURS_A_DAY);
		tempC.push(REFERENCE_C + season + front + day);
		if (random() < 1 / (14 * HOURS_A_DAY))
			storm = [-(4 + 16 * random()), 4 * gaussian(random), 2 * gaussian(random)];
		storm = scale(storm, 1 - 1 / 18);
		const quiet = 0.25 * Math.sin((TAU * (h - 11)) / HOURS_A_DAY);
		geomagneticMg.push(add(storm, [quiet, 0.6 * quiet, 0.3 * quiet]));
	}
	return { tempC, geomagneticMg };
}

export function makeNode(seed: number): SimNode {
	const random = seeded(seed);
	const headingRad = TAU * random();
	const around = (range: number): number => range * (2 * random() - 1);
	const earth: Vec3 = [200 * Math.cos(headingRad), -200 * Math.sin(headingRad), 400];
	const local: Vec3 = [around(30), around(30), around(30)];
	return {
		random,
		fieldMg: rotate(add(earth, local), unit(random), 0.08 * random()),
		offsetMg: [around(600), around(600), around(600)],
		tempcoPerC: -0.003 + 0.0001 * gaussian(random),
		offsetPerC: [around(1), around(1), around(1)],
		headingRad,
		warmerC: around(1.5),
		swing: 0.8 + 0.4 * random(),
		healedLoss: 0,
		residual: [0, 0, 0],
		injection: null,
		stayToH: -1,
		stay: null,
		vehicleMg: [0, 0, 0]
	};
}

const grown = (injection: Injection, h: number): number =>
	h < injection.startH ? 0 : Math.min(1, (h - injection.startH) / Math.max(1e-9, injection.rampH));

export const tempOf = (node: SimNode, { tempC }: Weather, h: number): number =>
	REFERENCE_C + node.swing * ((tempC[h] ?? REFERENCE_C) - REFERENCE_C) + node.warmerC;

function geomagneticAt(node: SimNode, { geomagneticMg }: Weather, h: number): Vec3 {
	const [north, east, down] = geomagneticMg[h] ?? [0, 0, 0];
	const c = Math.cos(node.headingRad);
	const s = Math.sin(node.headingRad);
	return [north * c + east * s, -north * s + east * c, down];
}

/** Share of film lost now. */
const filmLoss = (node: SimNode, h: number): number => {
	const { injection } = node;
	if (injection?.cause !== 'film') return 0;
	return injection.amount * grown(injection, h) - node.healedLoss;
};

/** A pulse heals what the film has lost. */
export function heal(node: SimNode, h: number): void {
	node.healedLoss += filmLoss(node, h);
}

/** Field as a healed, gain-true sensor would give it at this temperature, and the offset. */
export function sensed(node: SimNode, sky: Weather, h: number): { field: Vec3; offset: Vec3 } {
	const { injection } = node;
	const warmer = tempOf(node, sky, h) - REFERENCE_C;
	let field = add(node.fieldMg, geomagneticAt(node, sky, h));
	let offset = add(node.offsetMg, scale(node.offsetPerC, warmer));
	let gain = 1 + node.tempcoPerC * warmer;
	if (injection !== null) {
		const share = grown(injection, h);
		if (injection.cause === 'steel') field = add(field, scale(injection.vectorMg, share));
		if (injection.cause === 'tilt') field = rotate(field, injection.axis, injection.amount * share);
		if (injection.cause === 'bridge') offset = add(offset, scale(injection.vectorMg, share));
		if (injection.cause === 'gain') gain *= 1 - injection.amount * share;
	}
	return { field: scale(field, gain), offset };
}

/** What was done to the node up to this hour, at reference temperature. */
export function injectedMg(node: SimNode, h: number): Vec3 {
	const { injection } = node;
	if (injection === null) return [0, 0, 0];
	const share = grown(injection, h);
	switch (injection.cause) {
		case 'film':
			return scale(node.fieldMg, -filmLoss(node, h));
		case 'gain':
			return scale(node.fieldMg, -injection.amount * share);
		case 'tilt': {
			const turned = rotate(node.fieldMg, injection.axis, injection.amount * share);
			return add(turned, scale(node.fieldMg, -1));
		}
		default:
			return scale(injection.vectorMg, share);
	}
}

const noise = (node: SimNode, sigmaMg: number): Vec3 => [
	sigmaMg * gaussian(node.random),
	sigmaMg * gaussian(node.random),
	sigmaMg * gaussian(node.random)
];

/** Raw reading after SET, without noise. */
export function levelOf(node: SimNode, sky: Weather, h: number): Vec3 {
	const { field, offset } = sensed(node, sky, h);
	return add(scale(field, 1 - filmLoss(node, h)), offset);
}

/** Raw reading in this hour: an hour's median with its noise, AR(1) residual, and a vehicle when occupied. */
export function hourLevel(
	node: SimNode,
	sky: Weather,
	h: number,
	ar: { rho: number; sigmaMg: number }
): Vec3 {
	const fresh = noise(node, ar.sigmaMg * Math.sqrt(1 - ar.rho ** 2));
	node.residual = add(scale(node.residual, ar.rho), fresh);
	const still = add(add(levelOf(node, sky, h), node.residual), noise(node, 0.15));
	return node.stay === null ? still : add(still, node.vehicleMg);
}

/** Moves the bay's occupancy on by an hour. */
export function occupy(node: SimNode, h: number, share: number): void {
	if (h < node.stayToH) return;
	node.stay = null;
	if (node.random() > share / 5) return;
	node.stayToH = h + 2 + Math.floor(6 * node.random());
	node.stay = `stay ${h}`;
	node.vehicleMg = scale(unit(node.random), 60 + 200 * node.random());
}

/** A pair as the node would read it: single readings with their noise. */
export function readPair(node: SimNode, sky: Weather, h: number, sigmaMg = 0.7) {
	const before = add(levelOf(node, sky, h), noise(node, sigmaMg / Math.sqrt(8)));
	heal(node, h);
	const { field, offset } = sensed(node, sky, h);
	return {
		setMg: add(add(field, offset), noise(node, sigmaMg)),
		resetMg: add(add(scale(field, -1), offset), noise(node, sigmaMg)),
		before: { polarity: 1 as const, rawMg: before },
		tempC: tempOf(node, sky, h)
	};
}

/** A random cause of 10 to 60 mG in full (film to 30 %), as a step or over up to a week. */
export function inject(node: SimNode, cause: Injected, startH: number): void {
	const { random } = node;
	const sizeMg = 12 + 48 * random();
	const rampH = random() < 0.5 ? 0 : 24 + 144 * random();
	const fieldMg = Math.hypot(...node.fieldMg);
	const axis: Vec3 = unit(random);
	// A housing is knocked askew about a level axis.
	const flat: Vec3 = [Math.cos(TAU * axis[0]), Math.sin(TAU * axis[0]), 0];
	const lever = Math.hypot(...cross(flat, node.fieldMg));
	const film = 0.04 + 0.26 * random();
	const amounts = { film, gain: sizeMg / fieldMg, tilt: sizeMg / lever, bridge: 0, steel: 0 };
	node.injection = {
		cause,
		startH,
		rampH: cause === 'film' ? 24 + 144 * random() : rampH,
		vectorMg: scale(axis, sizeMg),
		amount: amounts[cause],
		axis: flat
	};
}
