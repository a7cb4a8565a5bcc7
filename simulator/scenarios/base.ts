import { GOOD_NETWORK } from '../delivery';
import type { Scenario } from './types';

const MINUTE_S = 60;
const HOUR_S = 3600;

/** A quiet car park in mild weather: what 'easy' means in this project. */
export const EASY: Scenario = {
	name: 'easy',
	condition: 'clear vehicles, mild weather, good radio',
	ground: 'lot',
	days: 6,
	life: {
		vehicles: {
			medianMg: 190,
			sigma: 0.6,
			lowMg: 70,
			highMg: 800,
			vanShare: 0.1,
			askewM: 0.15,
			mostEchoMg: 40
		},
		stays: [
			{ share: 0.2, lowS: 4 * MINUTE_S, highS: 20 * MINUTE_S },
			{ share: 0.5, lowS: 20 * MINUTE_S, highS: 2 * HOUR_S },
			{ share: 0.3, lowS: 2 * HOUR_S, highS: 9 * HOUR_S }
		],
		gaps: [
			{ share: 0.5, lowS: 3 * MINUTE_S, highS: 30 * MINUTE_S },
			{ share: 0.5, lowS: 30 * MINUTE_S, highS: 3 * HOUR_S }
		]
	},
	noiseMg: [0.4, 0.7],
	climate: { meanC: 14, halfSwingC: 5, spellC: 2, cloudC: 0.5 },
	offsetPerC: 0.15,
	kappaPerC: -0.003,
	storms: { perWeek: 0, peakMg: 0, stepMg: 0 },
	traffic: { perHour: 6, lowMg: 2, highMg: 12, speedMPerS: [3, 9] },
	queues: null,
	togetherShare: 0,
	film: {
		lossShare: 0,
		lossRemaining: 1,
		lossDays: 7,
		flipsPerWeek: 0,
		magnetsPerWeek: 0,
		refreshAfterH: [2, 10]
	},
	offset: { stepsPerWeek: 0, stepMg: 0, creepShare: 0, creepMgPerWeek: 0 },
	pairEveryH: 168,
	resetsPerWeek: 0,
	rebootsPerWeek: 0,
	leastKeysShare: 0,
	clocks: { offShare: 0, absentShare: 0 },
	network: GOOD_NETWORK,
	periodS: 60,
	burstHz: [2, 4],
	batchRows: [1, 4],
	commissioning: { byRuleShare: 0, underVehicleShare: 0 },
	worksPerWeek: 0
};

/** Stays and gaps over the whole span of method.md 11: a minute to five days, gaps down to seconds. */
export const ALL_SPANS = {
	stays: [
		{ share: 0.2, lowS: MINUTE_S, highS: 5 * MINUTE_S },
		{ share: 0.45, lowS: 5 * MINUTE_S, highS: 90 * MINUTE_S },
		{ share: 0.29, lowS: 90 * MINUTE_S, highS: 10 * HOUR_S },
		{ share: 0.05, lowS: 10 * HOUR_S, highS: 40 * HOUR_S },
		{ share: 0.01, lowS: 40 * HOUR_S, highS: 120 * HOUR_S }
	],
	gaps: [
		{ share: 0.15, lowS: 30, highS: 2 * MINUTE_S },
		{ share: 0.5, lowS: 2 * MINUTE_S, highS: 30 * MINUTE_S },
		{ share: 0.35, lowS: 30 * MINUTE_S, highS: 4 * HOUR_S }
	]
};
