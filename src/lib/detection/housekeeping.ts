import { ask, doubtIt } from './entries';
import { endClosure } from './closure';
import { resolve, revealEchoes } from './neighbours';
import { endAisle } from './queue';
import { touch, type Group, type Node } from './state';
import { LONG_AGAIN_MS, longStayAfterMs } from './stays';
import { sampleHour } from './temperature';
import { size3 } from './vec';

const HOUR_MS = 3_600_000;

/** What is due by time rather than by a reading's value; looks at the node's own rows only. */
export function keepHouse(g: Group, n: Node, atMs: number): void {
	const { fast, slow } = n;
	if (slow.pending !== null && atMs >= slow.pendDeadlineMs) resolve(g, n, atMs, 'own');
	const settled = fast.open === 0 && slow.pending === null && slow.reference !== null;
	if (settled) {
		if (slow.echoes.length > 0) revealEchoes(g, n, atMs);
		if (slow.aisle !== null) endAisle(g, n, atMs);
		if (slow.closedUntilMs > 0 && atMs >= slow.closedUntilMs) endClosure(g, n, atMs);
		if (slow.state === 'occupied') holdLongStay(g, n, atMs);
		if (atMs >= fast.nextHourMs) sampleHour(n, atMs);
	}
	fast.checkAtMs = nextCheckMs(n, atMs, settled);
}

function nextCheckMs(n: Node, atMs: number, settled: boolean): number {
	const { slow, fast } = n;
	if (slow.reference === null) return Number.MAX_SAFE_INTEGER;
	if (atMs >= fast.nextHourMs) fast.nextHourMs = (Math.floor(atMs / HOUR_MS) + 1) * HOUR_MS;
	let next = fast.nextHourMs;
	if (!settled) return atMs;
	for (const e of slow.echoes) if (e.checkAfterMs > 0) next = Math.min(next, e.checkAfterMs);
	if (slow.aisle !== null) next = Math.min(next, slow.aisle.deadlineMs);
	if (slow.closedUntilMs > 0) next = Math.min(next, slow.closedUntilMs);
	return next;
}

/** A stay longer than usual: ask for a reading, then hold its disturbance against the arrival's (method 4). */
function holdLongStay(g: Group, n: Node, atMs: number): void {
	const { slow } = n;
	if (slow.arrival === null) return;
	const dueMs = slow.longCheckMs > 0 ? slow.longCheckMs : slow.arrival.atMs + longStayAfterMs(n);
	if (atMs < dueMs) return;
	touch(n);
	if (!slow.longAsked) {
		slow.longAsked = true;
		ask(g, n, 'reading', 'long stay', atMs);
		return;
	}
	slow.longAsked = false;
	slow.longCheckMs = atMs + LONG_AGAIN_MS;
	slow.longStay = standsAsItCame(n);
	if (!slow.longStay) doubtIt(n, 'long stay, field no longer as after the arrival', atMs);
}

function standsAsItCame(n: Node): boolean {
	const { fast, slow, params } = n;
	const first = slow.arrival?.first;
	if (first === undefined) return false;
	const now = {
		0: fast.level[0] - fast.baseline[0],
		1: fast.level[1] - fast.baseline[1],
		2: fast.level[2] - fast.baseline[2]
	};
	const [a, b] = [size3(first), size3(now)];
	const cosine = (first[0] * now[0] + first[1] * now[1] + first[2] * now[2]) / (a * b);
	const sizeKept = Math.abs(b - a) <= params.longSizeRatio * a;
	return sizeKept && cosine >= Math.cos((params.longAngleDeg * Math.PI) / 180);
}
