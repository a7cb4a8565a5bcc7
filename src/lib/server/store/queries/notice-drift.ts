import type { Sql } from './bulk';

/** What is known of a node's drift, for a notice. */
export interface DriftFacts {
	cause?: string;
	unexplainedMg?: number;
	rateMgPerDay?: number;
	daysLeftLo?: number;
	daysLeftHi?: number;
}

export async function driftFacts(
	_sql: Sql,
	_nodeIds: readonly number[]
): Promise<Map<number, DriftFacts>> {
	return new Map();
}
