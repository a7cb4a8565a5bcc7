import { heldThreshold } from './held-threshold';
import type { PublishedMethod } from './method';

const VERTICAL = 2;

/**
 * Fixed threshold on one axis: the simplest detector that papers compare with. The vertical axis,
 * calibrated once with the bay empty; taken above one level, free below another.
 */
export const fixedAxis: PublishedMethod = {
	name: 'fixed threshold, one axis',
	source: 'baseline detector of the comparisons in check-values 7',
	start: (quietMg) => {
		const hold = heldThreshold();
		return {
			take: ({ atMs, fieldMg }) => hold(atMs, Math.abs(fieldMg[VERTICAL] - quietMg[VERTICAL]))
		};
	}
};
