import { magnitude } from '$lib/magnetics/vector';
import { heldThreshold } from './held-threshold';
import type { PublishedMethod } from './method';

/** Fixed threshold on the field's magnitude against its calibrated value: does not care how the housing lies. */
export const fixedMagnitude: PublishedMethod = {
	name: 'fixed threshold, magnitude',
	source: 'baseline detector of the comparisons in check-values 7',
	start: (quietMg) => {
		const quiet = magnitude(quietMg);
		const hold = heldThreshold();
		return {
			take: ({ atMs, fieldMg }) => hold(atMs, Math.abs(magnitude(fieldMg) - quiet))
		};
	}
};
