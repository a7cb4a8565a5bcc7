import type { Vec3 } from '$lib/magnetics/vector';
import type { Pose } from './path';
import type { Random } from './random';

/**
 * A vehicle is a chain of dipoles along its body: a permanent part that turns with it and a part that
 * the Earth's field induces. Moments of real vehicles are not published (check-values 6); they are
 * scaled so that the field at the node lies in the range that method.md 11 names.
 */
interface BodyDipole {
	forwardM: number;
	leftM: number;
	heightM: number;
	/** A·m², [forward, left, up] of the vehicle. */
	permanent: Vec3;
	/** A·m², [north, east, down]; the same whichever way the vehicle stands. */
	induced: Vec3;
}

export interface Vehicle {
	lengthM: number;
	dipoles: BodyDipole[];
}

/** A vector that is summed up in place. */
export type Sum3 = [number, number, number];

export type Build = 'car' | 'van';

const SHAPE: Record<
	Build,
	{ lengthM: [number, number]; heightM: [number, number]; links: number }
> = {
	car: { lengthM: [3.6, 4.9], heightM: [0.32, 0.62], links: 5 },
	// High chassis: the steel is farther from the node and reaches farther sideways.
	van: { lengthM: [5, 6.2], heightM: [0.6, 1.1], links: 6 }
};
const UNIT_MOMENT_AM2 = 20;
/** A link stronger than this is drawn again; the weakest of 8 draws stands. */
const USUAL_LINK_AM2 = 250;

export function drawVehicle(rng: Random, build: Build, earthUnit: Vec3): Vehicle {
	const shape = SHAPE[build];
	const lengthM = rng.between(...shape.lengthM);
	const dipoles = Array.from({ length: shape.links }, (_, i): BodyDipole => {
		const forwardM = lengthM * (0.42 - (0.84 * i) / (shape.links - 1)) + rng.between(-0.2, 0.2);
		// Engine and axles carry more steel than the floor between them.
		const weight = (i === 0 || i === shape.links - 1 ? 1.7 : 0.8) * rng.between(0.5, 1.5);
		const induced = weight * rng.between(0.4, 1.2) * UNIT_MOMENT_AM2;
		return {
			forwardM,
			leftM: rng.between(-0.45, 0.45),
			heightM: rng.between(...shape.heightM),
			permanent: [
				rng.normal() * weight * UNIT_MOMENT_AM2 * 0.6,
				rng.normal() * weight * UNIT_MOMENT_AM2 * 0.5,
				rng.normal() * weight * UNIT_MOMENT_AM2 * 0.6
			],
			induced: [earthUnit[0] * induced, earthUnit[1] * induced, earthUnit[2] * induced]
		};
	});
	return { lengthM, dipoles };
}

/**
 * Adds a vehicle's field in a pose at a point [north, east, down] in metres (ground = 0) to `sum`; mG,
 * [north, east, down]. Millions of links are summed for a bench, so the dipole law of
 * $lib/magnetics/dipole is written out here without vectors; a test holds the two together.
 */
export function addVehicleFieldMg(vehicle: Vehicle, pose: Pose, atNedM: Vec3, sum: Sum3): void {
	const { noseE, noseN } = pose;
	for (const link of vehicle.dipoles) {
		const [f, l, u] = link.permanent;
		const mN = link.induced[0] + noseN * f + noseE * l;
		const mE = link.induced[1] + noseE * f - noseN * l;
		const mD = link.induced[2] - u;
		const rN = atNedM[0] - (pose.northM + noseN * link.forwardM + noseE * link.leftM);
		const rE = atNedM[1] - (pose.eastM + noseE * link.forwardM - noseN * link.leftM);
		const rD = atNedM[2] + link.heightM;
		const r2 = rN * rN + rE * rE + rD * rD;
		const perR3 = 1 / (r2 * Math.sqrt(r2));
		const along = (3 * (mN * rN + mE * rE + mD * rD)) / r2;
		sum[0] += (along * rN - mN) * perR3;
		sum[1] += (along * rE - mE) * perR3;
		sum[2] += (along * rD - mD) * perR3;
	}
}

/** The same as a vector of its own. */
export function vehicleFieldMg(vehicle: Vehicle, pose: Pose, atNedM: Vec3): Vec3 {
	const sum: Sum3 = [0, 0, 0];
	addVehicleFieldMg(vehicle, pose, atNedM, sum);
	return sum;
}

/** Its largest field at any of several points, mG. */
export const mostMg = (vehicle: Vehicle, pose: Pose, pointsNedM: readonly Vec3[]): number =>
	pointsNedM.reduce(
		(most, point) => Math.max(most, Math.hypot(...vehicleFieldMg(vehicle, pose, point))),
		0
	);

/** The same vehicle with every moment multiplied. */
export function scaleVehicle(vehicle: Vehicle, factor: number): Vehicle {
	const times = (v: Vec3): Vec3 => [v[0] * factor, v[1] * factor, v[2] * factor];
	return {
		lengthM: vehicle.lengthM,
		dipoles: vehicle.dipoles.map((link) => ({
			...link,
			permanent: times(link.permanent),
			induced: times(link.induced)
		}))
	};
}

const strongestAm2 = (vehicle: Vehicle): number =>
	Math.max(
		...vehicle.dipoles.map((link) => Math.hypot(...link.permanent) + Math.hypot(...link.induced))
	);

/**
 * A vehicle whose field has the wanted size at a point when it stands in a pose. Where the links
 * cancel at that point ('critical point') the scaling would need absurd steel, so it is drawn again.
 */
export function vehicleOfSize(
	rng: Random,
	build: Build,
	earthUnit: Vec3,
	sizeMg: number,
	pose: Pose,
	atNedM: Vec3
): Vehicle {
	let best: Vehicle | null = null;
	let bestMoment = Infinity;
	for (let tries = 0; tries < 8; tries++) {
		const drawn = drawVehicle(rng, build, earthUnit);
		const size = Math.hypot(...vehicleFieldMg(drawn, pose, atNedM));
		const scaled = scaleVehicle(drawn, sizeMg / Math.max(size, 1e-3));
		const moment = strongestAm2(scaled);
		if (moment < bestMoment) [best, bestMoment] = [scaled, moment];
		if (bestMoment <= USUAL_LINK_AM2) break;
	}
	return best!;
}
