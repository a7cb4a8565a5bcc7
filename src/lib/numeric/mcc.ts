export interface Table {
	truePositive: number;
	trueNegative: number;
	falsePositive: number;
	falseNegative: number;
}

/** Matthews correlation; 0 where a margin is empty (Chicco and Jurman, BMC Genomics 21:6, 2020). */
export function matthews(table: Table): number {
	const { truePositive: tp, trueNegative: tn, falsePositive: fp, falseNegative: fn } = table;
	const under = Math.sqrt(tp + fp) * Math.sqrt(tp + fn) * Math.sqrt(tn + fp) * Math.sqrt(tn + fn);
	return under === 0 ? 0 : (tp * tn - fp * fn) / under;
}
