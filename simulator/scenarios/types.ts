import type { Network } from '../delivery';
import type { Life } from '../schedule';
import type { QueueMix, TrafficMix } from '../traffic';

/** A line of method.md 11, or a mixture of them, as data. */
export interface Scenario {
	name: string;
	/** The condition it stands for, in words. */
	condition: string;
	/** `lot`: rows of bays side by side; `kerb`: bays end to end along a street. */
	ground: 'lot' | 'kerb';
	days: number;
	life: Life;
	/** Rms of each axis, mG, drawn per node. */
	noiseMg: readonly [number, number];
	climate: {
		meanC: number;
		halfSwingC: number;
		spellC: number;
		cloudC: number;
	};
	/** Largest offset tempco of an axis, mG/°C. */
	offsetPerC: number;
	/** Sensitivity tempco, 1/°C. */
	kappaPerC: number;
	storms: { perWeek: number; peakMg: number; stepMg: number };
	traffic: TrafficMix | null;
	queues: QueueMix | null;
	/** Share of visits whose neighbour bay fills within ten seconds of them. */
	togetherShare: number;
	film: {
		/** Share of nodes that lose film, and what is left of each axis after the time. */
		lossShare: number;
		lossRemaining: number;
		lossDays: number;
		flipsPerWeek: number;
		magnetsPerWeek: number;
		/** A pulse comes this long after a flip or magnet (a person approves the film refresh), hours. */
		refreshAfterH: readonly [number, number];
	};
	offset: {
		stepsPerWeek: number;
		stepMg: number;
		/** Share of nodes whose offset creeps, mG a week. */
		creepShare: number;
		creepMgPerWeek: number;
	};
	/** Pairs by rule, one in so many hours. */
	pairEveryH: number;
	/** RESET pulses followed by a SET some hours later, a node and week. */
	resetsPerWeek: number;
	rebootsPerWeek: number;
	/** Share of nodes that send none of the optional keys (no before and after of a pulse). */
	leastKeysShare: number;
	clocks: { offShare: number; absentShare: number };
	network: Network;
	periodS: number;
	burstHz: readonly [number, number];
	/** Rows to a message in a burst. */
	batchRows: readonly [number, number];
	/** Who accepts the references; a share of nodes may learn with a vehicle on the bay. */
	commissioning: { byRuleShare: number; underVehicleShare: number };
	/** Lasting steel or a knock, a node and week. */
	worksPerWeek: number;
}
