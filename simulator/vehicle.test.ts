import { describe, expect, test } from 'vitest';
import { dipoleFieldMg } from '$lib/magnetics/dipole';
import { random } from './random';
import {
	drawVehicle,
	mostMg,
	scaleVehicle,
	vehicleFieldMg,
	vehicleOfSize,
	type Vehicle
} from './vehicle';

const EARTH = [0.4, 0, 0.9165] as const;
const POSE = { eastM: 0, northM: 0, noseE: 0, noseN: 1 };

const oneLink = (permanent: readonly [number, number, number], heightM: number): Vehicle => ({
	lengthM: 4,
	dipoles: [{ forwardM: 0, leftM: 0, heightM, permanent, induced: [0, 0, 0] }]
});

describe('field of a vehicle', () => {
	test('of one upright link agrees with the axial dipole of check-values 6: 100 A·m² at 1 m is 200 mG', () => {
		const [north, east, down] = vehicleFieldMg(oneLink([0, 0, 100], 1), POSE, [0, 0, 0]);
		expect([north, east]).toEqual([0, 0]);
		// The moment points up, the node lies below on the axis: the field points up as well.
		expect(down).toBeCloseTo(-200, 9);
	});

	test('of m = (30, -20, 100) at (0.8, 0.4, 0.6) m is that of check-values 6', () => {
		const vehicle: Vehicle = {
			lengthM: 4,
			dipoles: [
				{ forwardM: 0, leftM: 0, heightM: 0.6, permanent: [0, 0, 0], induced: [30, -20, 100] }
			]
		};
		const field = vehicleFieldMg(vehicle, POSE, [0.8, 0.4, 0]);
		expect(field[0]).toBeCloseTo(101.845392, 5);
		expect(field[1]).toBeCloseTo(78.937079, 5);
		expect(field[2]).toBeCloseTo(14.352196, 5);
	});

	test('is the sum of its links by $lib/magnetics/dipole, whichever way the nose points', () => {
		const vehicle = drawVehicle(random(5, 'sum'), 'van', EARTH);
		const pose = { eastM: 1.2, northM: -0.7, noseE: 0.6, noseN: 0.8 };
		const at = [0.3, 0.5, 0.03] as const;
		const sum = [0, 0, 0];
		for (const link of vehicle.dipoles) {
			const [f, l, u] = link.permanent;
			// Left of the nose (E, N) = (0.6, 0.8) is (-0.8, 0.6).
			const moment = [
				link.induced[0] + 0.8 * f + 0.6 * l,
				link.induced[1] + 0.6 * f - 0.8 * l,
				link.induced[2] - u
			] as const;
			const linkN = pose.northM + 0.8 * link.forwardM + 0.6 * link.leftM;
			const linkE = pose.eastM + 0.6 * link.forwardM - 0.8 * link.leftM;
			const field = dipoleFieldMg(moment, [at[0] - linkN, at[1] - linkE, at[2] + link.heightM]);
			field.forEach((b, i) => (sum[i]! += b));
		}
		vehicleFieldMg(vehicle, pose, at).forEach((b, i) => expect(b).toBeCloseTo(sum[i]!, 9));
	});

	test('turns with the vehicle where it is permanent and stays where it is induced', () => {
		const permanent = oneLink([50, 0, 0], 0.5);
		const ahead = vehicleFieldMg(permanent, POSE, [0, 0, 0]);
		const back = vehicleFieldMg(permanent, { ...POSE, noseN: -1 }, [0, 0, 0]);
		expect(back[0]).toBeCloseTo(-ahead[0], 9);
		const induced: Vehicle = {
			...permanent,
			dipoles: [{ ...permanent.dipoles[0]!, permanent: [0, 0, 0], induced: [50, 0, 0] }]
		};
		expect(vehicleFieldMg(induced, { ...POSE, noseN: -1 }, [0, 0, 0])).toEqual(
			vehicleFieldMg(induced, POSE, [0, 0, 0])
		);
	});
});

test('a vehicle of a wanted size has it at its node, and reaches the next bay with far less', () => {
	const rng = random(11, 'size');
	for (const sizeMg of [40, 180, 1000]) {
		const vehicle = vehicleOfSize(rng, 'car', EARTH, sizeMg, POSE, [0, 0, 0.03]);
		expect(mostMg(vehicle, POSE, [[0, 0, 0.03]])).toBeCloseTo(sizeMg, 6);
		expect(mostMg(vehicle, POSE, [[0, 2.5, 0.03]])).toBeLessThan(sizeMg);
	}
});

test('twice the steel makes twice the field', () => {
	const vehicle = drawVehicle(random(3, 'twice'), 'car', EARTH);
	const at = [0.2, 2.4, 0.03] as const;
	const once = vehicleFieldMg(vehicle, POSE, at);
	vehicleFieldMg(scaleVehicle(vehicle, 2), POSE, at).forEach((b, i) =>
		expect(b).toBeCloseTo(2 * once[i]!, 9)
	);
});
