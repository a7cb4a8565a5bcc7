import { doubtIt, enter, lookBy } from './entries';
import { evidence } from './evidence';
import { carriedConfidence } from './confidence';
import { takeVacant } from './judge';
import { fromReferenceMg } from './reference';
import { touch, type Group, type Node } from './state';

/** Closes the bay: neither free nor taken for readers; the detector goes on recording. */
export function close(n: Node, toMs: number): void {
	n.slow.closedUntilMs = toMs;
	lookBy(n, toMs);
	touch(n);
}

/** At the end the quiet field is held against the reference (method 4, closed). */
export function endClosure(g: Group, n: Node, atMs: number): void {
	const { slow } = n;
	slow.closedUntilMs = 0;
	touch(n);
	const fromMg = fromReferenceMg(n, n.fast.level);
	if (fromMg > n.params.returnMg) {
		doubtIt(n, 'after works', atMs);
		return;
	}
	if (slow.state === 'vacant') return;
	takeVacant(n);
	enter(
		g,
		n,
		{
			type: 'known',
			state: 'vacant',
			atMs,
			uncertaintyS: 0,
			confidence: carriedConfidence(n),
			evidence: evidence([
				`quiet field ${Math.round(fromMg).toString()} mG from the reference after the closure`
			])
		},
		atMs
	);
}
