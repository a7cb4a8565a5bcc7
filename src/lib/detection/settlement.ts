import { putBack, putBaselineBack, voidEntry } from './entries';
import { atReference, fromReferenceMg } from './reference';
import { touch, triple, type Group, type Node, type Step } from './state';
import { onMg } from './thresholds';
import { shift3, v3, set3 } from './vec';

/**
 * A bay called vacant by a person although a vehicle stood there: its leaving brings the field home by a step.
 * Then the settlement is undone by itself (method 4, settling), and the step is the vehicle's departure.
 */
export function undoneByStep(g: Group, n: Node, step: Step, atMs: number): boolean {
	const { slow, fast } = n;
	const undo = slow.settle;
	if (undo === null || undo.entries !== slow.entries || undo.before.state !== 'occupied')
		return false;
	const left = v3();
	set3(left, fast.level);
	shift3(left, step.j, -1);
	if (!atReference(n, fast.level) || fromReferenceMg(n, triple(left)) < onMg(n)) return false;
	voidEntry(g, n, 'settled', undo.atMs, atMs, 'the vehicle left later, by its own step');
	putBack(n, undo.before);
	putBaselineBack(n, undo.before);
	slow.settle = null;
	touch(n);
	return true;
}
