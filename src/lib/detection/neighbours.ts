import { noteParting, takeBack } from './afterthought';
import { enter, lookBy, putBack, putBaselineBack, voidEntry } from './entries';
import { evidence, named, stepWords } from './evidence';
import { noteSuspect } from './film-suspect';
import { isArrival, judge, startStay, takeVacant, type Overlap } from './judge';
import { watchReference } from './provisional';
import { aisleLimitMg, markAisleUndone, takeAisle } from './queue';
import {
	floats,
	summed,
	touch,
	triple,
	type Echo,
	type Group,
	type Node,
	type Step
} from './state';
import { offMg, onMg } from './thresholds';
import { apart, shift3, size3, sumSize } from './vec';

const LEDGER = 4;
const ECHOES = 4;
const MS_PER_S = 1000;

const bracketsMeet = (n: Node, aFrom: number, aTo: number, bFrom: number, bTo: number): boolean => {
	const slack = n.params.slackS * MS_PER_S;
	return aFrom - slack <= bTo && bFrom - slack <= aTo;
};

/** Earliest time at which a movement that is still open can have begun. */
function openFromMs(m: Node): number {
	const { openOldAtMs, openNewAtMs, openN } = m.fast;
	return openN > 1 ? Math.max(openOldAtMs, openNewAtMs - m.params.onsetS * MS_PER_S) : openOldAtMs;
}

function overlaps(n: Node, step: Step): Overlap[] {
	const found: Overlap[] = [];
	for (const m of n.near) {
		const steps = m.slow.pending === null ? m.slow.steps : [...m.slow.steps, m.slow.pending];
		const meeting = steps.filter(
			(s) => s.became !== 'film' && bracketsMeet(n, s.fromMs, s.toMs, step.fromMs, step.toMs)
		);
		const biggest = meeting.sort((a, b) => size3(b.j) - size3(a.j))[0];
		if (biggest !== undefined) found.push({ node: m, step: biggest });
	}
	return found;
}

const movingBeside = (n: Node, step: Step): boolean =>
	n.near.some((m) => m.fast.open === 1 && openFromMs(m) - n.params.slackS * MS_PER_S <= step.toMs);

/** A level that may stand in the aisle waits until a like step of its row can have come. */
const weak = (n: Node, step: Step): boolean =>
	n.mates.length > 0 &&
	n.slow.state === 'vacant' &&
	step.gapS === 0 &&
	isArrival(n, step) &&
	apart(n.fast.level, n.fast.baseline) < aisleLimitMg(n, step);

/** Decides the pending step when nothing it must be compared with is open any more. */
export function resolve(
	g: Group,
	n: Node,
	atMs: number,
	cause: 'own' | 'neighbour' | 'forced'
): void {
	const step = n.slow.pending;
	if (step === null) return;
	const due = cause === 'forced' || (cause === 'own' && atMs >= n.slow.pendDeadlineMs);
	if (!due && (movingBeside(n, step) || weak(n, step))) {
		lookBy(n, n.slow.pendDeadlineMs);
		return;
	}
	decide(g, n, step, atMs);
}

/** Holds a settled step until resolve() may decide it. */
export function hold(g: Group, n: Node, step: Step, atMs: number): void {
	const { params } = n;
	n.slow.pending = step;
	const waitS = weak(n, step) ? Math.max(params.queueS, params.pendS) : params.pendS;
	n.slow.pendDeadlineMs = atMs + waitS * MS_PER_S;
	n.fast.visibleAtMs = atMs;
	g.active++;
	touch(n);
	resolve(g, n, atMs, 'own');
}

function decide(g: Group, n: Node, step: Step, atMs: number): void {
	n.slow.pending = null;
	g.active--;
	markDecided(n, atMs);
	const others = overlaps(n, step);
	const big = others.reduce<Overlap | null>(
		(best, o) => (best === null || size3(o.step.j) > size3(best.step.j) ? o : best),
		null
	);
	const size = size3(step.j);
	const by = big !== null && isEchoOf(n, step, size, big) ? big : besideUs(n, step, size, others);
	if (takeBack(g, n, step, others, atMs)) watchReference(g, n, step, atMs);
	else if (by !== null && !undoesOwn(n, step)) takeEcho(n, step, by);
	else if (!takeAisle(g, n, step, atMs)) judgeAlone(g, n, step, others, atMs);
	keepInLedger(n, step);
	for (const o of others) {
		if (
			o.step.became !== 'pending' &&
			isEchoOf(o.node, o.step, size3(o.step.j), { node: n, step })
		) {
			turnIntoEcho(g, o.node, o.step, n, step, atMs);
		}
	}
	markUndone(n, step);
	markAisleUndone(n, step);
	for (const m of n.near) resolve(g, m, atMs, 'neighbour');
}

/** Neither echo nor aisle: the step is the bay's own. */
function judgeAlone(g: Group, n: Node, step: Step, others: readonly Overlap[], atMs: number): void {
	leaveAlone(g, n, step, atMs);
	const { arrival, sinceMs } = n.slow;
	const baseline = triple(n.fast.baseline);
	judge(g, n, step, others, atMs);
	if (step.became === 'departure') noteParting(n, step, arrival, baseline);
	noteSuspect(n, step, arrival, sinceMs);
	watchReference(g, n, step, atMs);
}

/**
 * Smaller than the neighbour's, and moved as it did: what a vehicle does to the next bay begins with its
 * driving off, or ends with its coming to rest.
 */
function isEchoOf(n: Node, step: Step, size: number, big: Overlap): boolean {
	const sharp = step.burst && big.step.burst;
	const limit = sharp ? n.params.echoRatio : n.params.echoSlowRatio;
	if (size >= limit * size3(big.step.j)) return false;
	if (!sharp || size < n.params.echoSureRatio * size3(big.step.j)) return true;
	const earlyMs = n.params.echoEarlyS * MS_PER_S;
	const lateMs = n.params.echoLateS * MS_PER_S;
	const ends = step.toMs - big.step.toMs;
	const begins = step.newMs - big.step.newMs;
	const endsWith = ends <= lateMs && ends >= -earlyMs;
	const beginsWith = begins >= -lateMs && begins <= earlyMs;
	const came = cameOrLeft(big);
	return came === 'came' ? endsWith : came === 'left' ? beginsWith : endsWith || beginsWith;
}

function cameOrLeft({ node, step }: Overlap): 'came' | 'left' | 'either' {
	if (step.became === 'arrival') return 'came';
	if (step.became === 'departure') return 'left';
	if (step.became !== 'pending' || node.slow.state === 'unknown') return 'either';
	return node.slow.state === 'vacant' ? 'came' : 'left';
}

/**
 * What stands in the lane beside an occupied bay is felt alike by the bays next to each other, where a vehicle
 * of the bay itself is felt by one far more than by the rest.
 */
function besideUs(n: Node, step: Step, size: number, others: readonly Overlap[]): Overlap | null {
	const { queueFactor, queueFlatOnRatio, echoRatio } = n.params;
	if (n.slow.state !== 'occupied' || !step.burst || size >= queueFlatOnRatio * onMg(n)) return null;
	const alike = others.filter(({ step: other }) => {
		const ratio = size3(other.j) / size;
		const own = other.became === 'arrival' || other.became === 'departure';
		return other.burst && !own && ratio > echoRatio / LESS_THAN_ECHO && ratio <= queueFactor;
	});
	return alike[0] ?? null;
}

/** An echo the other way round would be smaller than this part of the limit. */
const LESS_THAN_ECHO = 1.2;

/** Nodes that a decision reads or may write: rows of theirs up to here come late from now on. */
function markDecided(n: Node, atMs: number): void {
	n.fast.decidedAtMs = Math.max(n.fast.decidedAtMs, atMs);
	n.fast.visibleAtMs = atMs;
	for (const m of n.near) m.fast.decidedAtMs = Math.max(m.fast.decidedAtMs, atMs);
	for (const m of n.mates) m.fast.decidedAtMs = Math.max(m.fast.decidedAtMs, atMs);
}

/** A step that takes the arrival back in size and direction is the vehicle's own, whatever a neighbour does. */
function undoesOwn(n: Node, step: Step): boolean {
	const { arrival } = n.slow;
	if (arrival === null || n.slow.state !== 'occupied') return false;
	const rest = Math.min(sumSize(step.j, arrival.step), sumSize(step.j, arrival.first));
	const stood = size3(arrival.step);
	if (rest <= n.params.exactRatio * stood) return true;
	return !step.burst && rest <= n.params.exactSlowRatio * Math.min(stood, size3(step.j));
}

function keepInLedger(n: Node, step: Step): void {
	for (const s of n.slow.steps) {
		if (step.before !== null) s.before = null;
	}
	n.slow.steps.push(step);
	if (n.slow.steps.length > LEDGER) n.slow.steps.shift();
	touch(n);
}

/** The neighbour's vehicle: no state changes, the baseline moves by J, vacant or occupied. */
function takeEcho(n: Node, step: Step, big: Overlap): void {
	step.became = 'echo';
	shift3(n.fast.baseline, step.j);
	if (endsEcho(n, step)) return;
	rememberEcho(n, step, big.node, big.step);
}

/** Takes the echo that this step undoes out of the list. */
function endsEcho(n: Node, step: Step): boolean {
	const { echoes } = n.slow;
	const at = echoes.findIndex(
		(e) => sumSize(step.j, e.j) <= Math.max(offMg(n), n.params.echoUndoRatio * size3(e.j))
	);
	if (at < 0) return false;
	n.slow.echoes = echoes.filter((_, i) => i !== at);
	touch(n);
	return true;
}

function rememberEcho(n: Node, step: Step, by: Node, byStep: Step): void {
	if (size3(step.j) < offMg(n)) return;
	n.slow.echoes.push({
		by: by.id,
		j: floats(step.j),
		byJ: floats(byStep.j),
		atMs: step.atMs,
		uncertaintyS: step.uncertaintyS,
		settledMs: step.settledMs,
		checkAfterMs: 0
	});
	if (n.slow.echoes.length > ECHOES) n.slow.echoes.shift();
	touch(n);
}

/** A neighbour's later decision shows that this step was its echo: what it entered never happened. */
function turnIntoEcho(g: Group, m: Node, step: Step, by: Node, byStep: Step, atMs: number): void {
	const { became, before } = step;
	if (became === 'pending' || became === 'echo' || became === 'aisle' || became === 'film') return;
	if (became !== 'nothing') {
		if (before === null || m.slow.sinceMs !== step.atMs) return;
		if (became === 'departure' && exactDeparture(m, step)) return;
		voidEntry(g, m, became, step.atMs, atMs, `echo of neighbour ${named(by.id)}`);
		putBack(m, before);
		if (became === 'departure') {
			putBaselineBack(m, before);
			m.fast.rebase = 0;
			m.fast.stayMg = Math.fround(size3(before.arrival?.step ?? [0, 0, 0]));
		}
	}
	step.became = 'echo';
	step.before = null;
	shift3(m.fast.baseline, step.j);
	if (!endsEcho(m, step)) rememberEcho(m, step, by, byStep);
	m.fast.visibleAtMs = atMs;
	touch(m);
}

function exactDeparture(m: Node, step: Step): boolean {
	const arrival = step.before?.arrival;
	if (arrival === null || arrival === undefined) return false;
	return sumSize(step.j, arrival.step) <= m.params.exactRatio * size3(arrival.step);
}

/** Echoes of a step that is now undone must go with it; their bays look again at their next reading. */
function markUndone(n: Node, step: Step): void {
	for (const m of n.near) {
		for (const e of m.slow.echoes) {
			if (e.by !== n.id || e.checkAfterMs > 0) continue;
			const undone = Math.max(offMg(n), n.params.undoRatio * size3(e.byJ));
			if (sumSize(step.j, e.byJ) > undone) continue;
			e.checkAfterMs = step.toMs + n.params.slackS * MS_PER_S;
			lookBy(m, e.checkAfterMs);
			touch(m);
		}
	}
}

/** Echoes whose vehicle has gone while they stayed: they were vehicles, entered at their own time. */
export function revealEchoes(g: Group, n: Node, atMs: number): void {
	const due = n.slow.echoes.filter((e) => e.checkAfterMs > 0 && e.checkAfterMs < atMs);
	if (due.length === 0) return;
	n.slow.echoes = n.slow.echoes.filter((e) => !due.includes(e));
	touch(n);
	for (const e of due) reveal(g, n, e, atMs);
}

function reveal(g: Group, n: Node, e: Echo, atMs: number): void {
	const { fast, slow } = n;
	const changedSince = slow.sinceMs !== null && slow.sinceMs > e.atMs;
	// A departure since has taken the level as it was for the baseline: the echo is no part of it any more.
	if (changedSince && slow.state === 'vacant') return;
	const withEcho = apart(fast.level, fast.baseline);
	shift3(fast.baseline, e.j, -1);
	const without = apart(fast.level, fast.baseline);
	if (changedSince) return;
	if (slow.state === 'vacant' && without >= onMg(n) && withEcho < without)
		arriveAfterAll(g, n, e, atMs);
	else if (slow.state === 'occupied') leaveAfterAll(g, n, e, atMs);
}

/** A step that takes an echo back by itself shows that the echo was a vehicle: it came then, it leaves now. */
function leaveAlone(g: Group, n: Node, step: Step, atMs: number): void {
	if (n.slow.state !== 'vacant' || movingBeside(n, step)) return;
	const e = n.slow.echoes.find(
		(known) =>
			size3(known.j) >= onMg(n) && sumSize(step.j, known.j) <= n.params.exactRatio * size3(known.j)
	);
	if (e === undefined || (n.slow.sinceMs ?? 0) > e.atMs) return;
	n.slow.echoes = n.slow.echoes.filter((known) => known !== e);
	shift3(n.fast.baseline, e.j, -1);
	arriveAfterAll(g, n, e, atMs);
	n.slow.arrival = { step: e.j, first: e.j, atMs: e.atMs };
	n.fast.stayMg = Math.fround(size3(e.j));
}

function arriveAfterAll(g: Group, n: Node, e: Echo, atMs: number): void {
	startStay(n, e.atMs);
	enter(
		g,
		n,
		{
			type: 'arrival',
			state: 'occupied',
			atMs: e.atMs,
			uncertaintyS: e.uncertaintyS,
			confidence: 0.9,
			evidence: afterAll(e)
		},
		atMs
	);
}

function leaveAfterAll(g: Group, n: Node, e: Echo, atMs: number): void {
	const { arrival } = n.slow;
	if (arrival === null) return;
	const undone = Math.max(offMg(n), n.params.undoRatio * size3(arrival.step));
	if (sumSize(e.j, arrival.step) > undone) {
		n.slow.arrival = { ...arrival, step: summed(arrival.step, e.j) };
		return;
	}
	const baseline = triple(n.fast.baseline);
	takeVacant(n);
	enter(
		g,
		n,
		{
			type: 'departure',
			state: 'vacant',
			atMs: e.atMs,
			uncertaintyS: e.uncertaintyS,
			confidence: 0.85,
			evidence: afterAll(e)
		},
		atMs
	);
	noteParting(n, e, arrival, baseline);
}

const afterAll = (e: Echo) =>
	evidence([
		`${stepWords({ j: e.j, gapS: 0, riseS: e.uncertaintyS } as Step, 'moved')} with neighbour ${named(e.by)}, and stayed when that one left`
	]);
