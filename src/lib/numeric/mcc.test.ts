import { expect, test } from 'vitest';
import { matthews } from './mcc';

// Source: check-values.md 10 (MCC; zero convention after Chicco and Jurman 2020).
test.each([
	[50, 40, 5, 5, 0.79798],
	[10, 10, 0, 0, 1],
	[5, 5, 5, 5, 0],
	[90, 0, 9, 1, -0.0316],
	[0, 10, 0, 0, 0]
])(
	'TP %i, TN %i, FP %i, FN %i: %f',
	(truePositive, trueNegative, falsePositive, falseNegative, mcc) => {
		const table = { truePositive, trueNegative, falsePositive, falseNegative };
		expect(matthews(table)).toBeCloseTo(mcc, 4);
	}
);
