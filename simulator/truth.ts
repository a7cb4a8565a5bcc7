import type { NodeEvent } from './film';

/** A vehicle standing in a bay. */
export interface Stay {
	bayIndex: number;
	fromMs: number;
	toMs: number;
	/** Field that it makes at its own node, mG. */
	sizeMg: number;
	leftM: number;
}

/** Anything else that moves a node's field or its film, so that a miss can be explained. */
export interface Incident {
	nodeIndex: number;
	kind: 'echo' | 'pass' | 'queue' | NodeEvent['kind'] | 'outage';
	atMs: number;
	toMs: number;
	/** Size at the node, mG; 0 where it has none. */
	mg: number;
}

/** What the data really held: a bench fails when its hard cases did not occur. */
export interface Facts {
	stays: number;
	leastVehicleMg: number;
	mostVehicleMg: number;
	shortestStayS: number;
	longestStayS: number;
	shortestGapS: number;
	mostEchoMg: number;
	echoesOver30Mg: number;
	mostPassMg: number;
	passesOver20Mg: number;
	queueLevelsOver20Mg: number;
	together: number;
	losses: number;
	flips: number;
	magnets: number;
	offsetSteps: number;
	offsetCreeps: number;
	resets: number;
	pairs: number;
	reboots: number;
	works: number;
	coldestC: number;
	warmestC: number;
	stormPeakMg: number;
	stormStepMg: number;
	noisiestMg: number;
	clocksOff: number;
	clocksAbsent: number;
	learnedUnderVehicle: number;
	sent: number;
	lost: number;
	duplicated: number;
	reordered: number;
	late: number;
	backlog: number;
	rows: number;
}

export interface Truth {
	fromMs: number;
	/** From here on states are judged: commissioning is over. */
	judgedFromMs: number;
	toMs: number;
	stays: Stay[];
	incidents: Incident[];
	facts: Facts;
}

export const noFacts = (): Facts => ({
	stays: 0,
	leastVehicleMg: Infinity,
	mostVehicleMg: 0,
	shortestStayS: Infinity,
	longestStayS: 0,
	shortestGapS: Infinity,
	mostEchoMg: 0,
	echoesOver30Mg: 0,
	mostPassMg: 0,
	passesOver20Mg: 0,
	queueLevelsOver20Mg: 0,
	together: 0,
	losses: 0,
	flips: 0,
	magnets: 0,
	offsetSteps: 0,
	offsetCreeps: 0,
	resets: 0,
	pairs: 0,
	reboots: 0,
	works: 0,
	coldestC: Infinity,
	warmestC: -Infinity,
	stormPeakMg: 0,
	stormStepMg: 0,
	noisiestMg: 0,
	clocksOff: 0,
	clocksAbsent: 0,
	learnedUnderVehicle: 0,
	sent: 0,
	lost: 0,
	duplicated: 0,
	reordered: 0,
	late: 0,
	backlog: 0,
	rows: 0
});
