import type { Judged } from '$lib/accuracy/calibration';
import type { Generated } from '../../../simulator/generate';
import { apartAt, apartWindows } from './apart';
import type { Detected } from './detect';
import { takenAt } from './grade';

/** Confidence is judged at random instants and, apart, within 30 min of events (method 4). */
export interface JudgedLooks {
	random: Judged[];
	nearEvents: Judged[];
	/** Random instants at which the confidence was a cap: an upper limit, not an estimate. */
	capped: Judged[];
	looks: number;
	unknown: number;
	doubtful: number;
	/** Of looks at bays whose reference was learned under a vehicle: how many were doubtful. */
	underVehicle: { looks: number; doubtful: number };
}

const NEAR_MS = 30 * 60_000;

export function judgeLooks(generated: Generated, detected: Detected, run: string): JudgedLooks {
	const { stays, toMs } = generated.truth;
	const judged: JudgedLooks = {
		random: [],
		nearEvents: [],
		capped: [],
		looks: 0,
		unknown: 0,
		doubtful: 0,
		underVehicle: { looks: 0, doubtful: 0 }
	};
	const windows = generated.plan.bays.map((_, bayIndex) => apartWindows(generated, bayIndex));
	for (const look of detected.looks) {
		const { bayIndex, atMs, state, confidence, doubt, capped } = look;
		if (apartAt(windows[bayIndex]!, toMs) !== null) {
			judged.underVehicle.looks++;
			if (doubt !== null) judged.underVehicle.doubtful++;
			continue;
		}
		if (apartAt(windows[bayIndex]!, atMs) !== null) continue;
		judged.looks++;
		if (doubt !== null) judged.doubtful++;
		if (state === 'unknown' || confidence === null) {
			judged.unknown++;
			continue;
		}
		const right = (state === 'occupied') === takenAt(stays, look);
		const one = { cluster: `${run} ${bayIndex}`, confidence, right };
		if (capped) {
			judged.capped.push(one);
			continue;
		}
		judged.random.push(one);
		const near = stays.some(
			(stay) =>
				stay.bayIndex === bayIndex &&
				(Math.abs(stay.fromMs - atMs) < NEAR_MS || Math.abs(stay.toMs - atMs) < NEAR_MS)
		);
		if (near) judged.nearEvents.push(one);
	}
	return judged;
}
