import { GOOD_NETWORK } from '../delivery';
import { ALL_SPANS, EASY } from './base';
import type { Scenario } from './types';

const { life } = EASY;

/** Each line of method.md 11 by itself, on an otherwise easy site. */
export const LINES: readonly Scenario[] = [
	{
		...EASY,
		name: 'noise',
		condition: 'sensor noise 0.4 to 1.5 mG rms',
		noiseMg: [0.4, 1.5]
	},
	{
		...EASY,
		name: 'frost',
		condition: 'down to -20 °C, offset tempco to 1 mG/°C, sensitivity -0.3 %/°C',
		climate: { meanC: -4, halfSwingC: 9, spellC: 6, cloudC: 2 },
		offsetPerC: 1
	},
	{
		...EASY,
		name: 'heat',
		condition: 'up to +60 °C with 40 °C a day, offset tempco to 1 mG/°C, sensitivity -0.3 %/°C',
		climate: { meanC: 36, halfSwingC: 20, spellC: 4, cloudC: 4 },
		offsetPerC: 1
	},
	{
		...EASY,
		name: 'storms',
		condition: 'horizontal storms to 20 mG with steps of 7 mG in a minute',
		storms: { perWeek: 4, peakMg: 20, stepMg: 7 }
	},
	{
		...EASY,
		name: 'sizes',
		condition: 'vehicles of 40 to 1000 mG, some askew',
		life: {
			...life,
			vehicles: {
				medianMg: 130,
				sigma: 0.95,
				lowMg: 40,
				highMg: 1000,
				vanShare: 0.2,
				askewM: 0.45,
				mostEchoMg: 80
			}
		}
	},
	{
		...EASY,
		name: 'echo',
		condition: "neighbours' echo to 80 mG",
		life: {
			...life,
			vehicles: {
				medianMg: 420,
				sigma: 0.6,
				lowMg: 60,
				highMg: 1000,
				vanShare: 0.55,
				askewM: 0.4,
				mostEchoMg: 80
			}
		},
		togetherShare: 0.01
	},
	{
		...EASY,
		name: 'traffic',
		condition: 'passing traffic to 60 mG for 1 to 6 s',
		ground: 'kerb',
		traffic: { perHour: 15, lowMg: 4, highMg: 60, speedMPerS: [1.4, 6] }
	},
	{
		...EASY,
		name: 'queues',
		condition: 'queues of minutes in the lane',
		ground: 'kerb',
		queues: { perDay: 8, lowMg: 8, highMg: 60, haltS: [40, 420] }
	},
	{
		...EASY,
		name: 'spans',
		condition: 'stays from 1 min to 5 days, gaps from 30 s',
		days: 10,
		life: { ...life, ...ALL_SPANS }
	},
	{
		...EASY,
		name: 'offset',
		condition: 'offset steps and creep',
		offset: { stepsPerWeek: 1, stepMg: 30, creepShare: 0.4, creepMgPerWeek: 30 }
	},
	{
		...EASY,
		name: 'film-loss',
		condition: 'film loss to 30 % in a week',
		days: 8,
		film: { ...EASY.film, lossShare: 0.7, lossRemaining: 0.7 }
	},
	{
		...EASY,
		name: 'flips',
		condition: 'one axis or the whole film flipped',
		film: { ...EASY.film, flipsPerWeek: 1.2 }
	},
	{
		...EASY,
		name: 'magnets',
		condition: 'a magnet over the node: overload, then a film left anyhow',
		film: { ...EASY.film, magnetsPerWeek: 0.8 }
	},
	{
		...EASY,
		name: 'pulses',
		condition: 'pairs, SET and RESET pulses at any time, film part lost before them',
		film: { ...EASY.film, lossShare: 0.5, lossRemaining: 0.8 },
		pairEveryH: 20,
		resetsPerWeek: 2,
		leastKeysShare: 0.3
	},
	{
		...EASY,
		name: 'radio',
		condition: '20 % of messages lost, duplicates, out of order by minutes, late by a day',
		network: {
			...GOOD_NETWORK,
			lossShare: 0.2,
			duplicateShare: 0.05,
			reorderShare: 0.05,
			reorderMs: 300_000,
			dayLateShare: 0.01
		}
	},
	{
		...EASY,
		name: 'reboots',
		condition: 'reboots with a backlog',
		rebootsPerWeek: 5,
		network: { ...GOOD_NETWORK, outagesPerWeek: 4, outageMs: [300_000, 14_400_000] }
	},
	{
		...EASY,
		name: 'clocks',
		condition: 'clocks off by an hour or absent',
		clocks: { offShare: 0.4, absentShare: 0.3 }
	},
	{
		...EASY,
		name: 'heartbeats',
		condition: 'heartbeats only (60 s) with the bursts lost',
		network: { ...GOOD_NETWORK, heartbeatsOnly: true }
	},
	{
		...EASY,
		name: 'two-bays',
		condition: 'vehicles over the line, up to 0.9 m off the middle of their bay',
		life: { ...life, vehicles: { ...life.vehicles, askewM: 0.9, mostEchoMg: 250 } }
	},
	{
		...EASY,
		name: 'silence',
		condition: 'not heard for hours, nothing left of it afterwards',
		network: {
			...GOOD_NETWORK,
			outagesPerWeek: 6,
			outageMs: [600_000, 14_400_000],
			outageLeaves: 'nothing'
		}
	},
	{
		...EASY,
		name: 'by-rule',
		condition: 'references by rule, some learned under a vehicle',
		commissioning: { byRuleShare: 1, underVehicleShare: 0.25 }
	}
];

/** All at once, at the strengths of method.md 11. */
export const HARD: Scenario = {
	...EASY,
	name: 'hard',
	condition: 'all at once',
	days: 8,
	life: {
		...life,
		...ALL_SPANS,
		vehicles: {
			medianMg: 150,
			sigma: 0.9,
			lowMg: 40,
			highMg: 1000,
			vanShare: 0.2,
			askewM: 0.4,
			mostEchoMg: 80
		}
	},
	noiseMg: [0.4, 1.5],
	climate: { meanC: 22, halfSwingC: 18, spellC: 5, cloudC: 4 },
	offsetPerC: 1,
	storms: { perWeek: 1.5, peakMg: 20, stepMg: 7 },
	traffic: { perHour: 8, lowMg: 3, highMg: 60, speedMPerS: [1.4, 6] },
	queues: { perDay: 3, lowMg: 8, highMg: 60, haltS: [40, 420] },
	togetherShare: 0.02,
	film: {
		lossShare: 0.25,
		lossRemaining: 0.7,
		lossDays: 7,
		flipsPerWeek: 0.2,
		magnetsPerWeek: 0.15,
		refreshAfterH: [2, 10]
	},
	offset: { stepsPerWeek: 0.2, stepMg: 30, creepShare: 0.15, creepMgPerWeek: 30 },
	pairEveryH: 168,
	resetsPerWeek: 0.2,
	rebootsPerWeek: 0.7,
	leastKeysShare: 0.05,
	clocks: { offShare: 0.06, absentShare: 0.06 },
	network: {
		...GOOD_NETWORK,
		lossShare: 0.05,
		duplicateShare: 0.02,
		reorderShare: 0.02,
		reorderMs: 180_000,
		dayLateShare: 0.002,
		outagesPerWeek: 0.4,
		outageMs: [300_000, 3_600_000]
	}
};

export const ALL_SCENARIOS: readonly Scenario[] = [EASY, ...LINES, HARD];

export const scenarioByName = (name: string): Scenario | undefined =>
	ALL_SCENARIOS.find((scenario) => scenario.name === name);
