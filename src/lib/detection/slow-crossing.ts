import { SLOW_CROSSING } from './confidence';
import { clearDoubt, doubtIt } from './entries';
import type { Node } from './state';
import { offMg, onMg } from './thresholds';

/**
 * A still level over the threshold that no step brought: drift, or a vehicle that was not seen to come. The bay
 * is doubtful, not occupied (method 4, step rule), until the field is back or a step tells.
 */
export function watchSlowCrossing(n: Node, dMg: number, atMs: number): void {
	const { slow } = n;
	if (slow.doubt === null) {
		if (dMg >= onMg(n) && slow.pending === null) doubtIt(n, SLOW_CROSSING, atMs);
	} else if (slow.doubt.reason === SLOW_CROSSING && dMg < offMg(n)) clearDoubt(n);
}
