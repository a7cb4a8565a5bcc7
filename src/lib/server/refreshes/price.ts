import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import type { RefreshParams } from './params';

const DAY_S = 86_400;
const DAYS_PER_YEAR = 365.25;
const UC_PER_MAH = 3_600_000;
/** SET, RESET, SET. */
const PULSES = 3;
/** Two habits taken and put back, the pair, and an ack of each of the three commands. */
const FRAMES = 4;
/** How long the radio listens for the three commands, s: an assumption. */
const LISTEN_S = 3;

export interface Price {
	chargeMc: number;
	/** Life of the cell that this charge stands for, at the node's usual habit. */
	batteryDays: number;
}

/**
 * What one film refresh costs (method 7, 10): pulses, frames and listening, and the still readings that
 * prove it, each its own frame. In days: over what the node draws in a usual day.
 */
export function priceOf(profile: SensorProfile, periodS: number, params: RefreshParams): Price {
	const { pulseChargeUc, frameChargeUc, radioChargeUcPerS } = profile;
	const frames = FRAMES + params.stillReadings;
	const chargeUc = PULSES * pulseChargeUc + frames * frameChargeUc + LISTEN_S * radioChargeUcPerS;
	const ownLossUc =
		(profile.selfDischargePerYear * profile.cellCapacityMah * UC_PER_MAH) / DAYS_PER_YEAR;
	const usualUc = DAY_S * profile.sleepCurrentUa + (DAY_S / periodS) * frameChargeUc + ownLossUc;
	return { chargeMc: chargeUc / 1000, batteryDays: usualUc > 0 ? chargeUc / usualUc : 0 };
}

export const addPrices = (prices: readonly Price[]): Price => ({
	chargeMc: prices.reduce((sum, { chargeMc }) => sum + chargeMc, 0),
	batteryDays: prices.reduce((sum, { batteryDays }) => sum + batteryDays, 0)
});
