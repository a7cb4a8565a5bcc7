import { carriedConfidence, HOLDS_VEHICLE } from './confidence';
import { doubtIt, enter, voidEntry } from './entries';
import { evidence } from './evidence';
import { atReference } from './reference';
import {
	floats,
	summed,
	touch,
	triple,
	type Group,
	type Node,
	type Step,
	type Strange
} from './state';
import { onMg } from './thresholds';
import { apart, set3, size3, sumSize } from './vec';

/** A vehicle's step here is at least this many thresholds: what passes beside the bay is smaller. */
const VEHICLE_ON = 2;
/** A vehicle's leaving repeats its coming within this share. */
const SAME_SHARE = 0.05;
/** Visits to an empty bay are by vehicles that differ by this share of their field, or one of them is no vehicle. */
const OTHER_SHARE = 0.25;
/** The third occupied spell that ends at the strange field; the first time it was only come upon. */
const DOUBT_VISITS = 4;
const MOST_MOVES = 8;

const doubtful = (n: Node): boolean =>
	n.slow.reference?.provisional === true && n.slow.returns === 0;

/**
 * A provisional reference may have been learned under a vehicle (method 3). Then the field it lacks, the empty
 * bay's, is the one that comes back after every visit. The third spell that ends there is a doubt; seen
 * `swapVisits` times, between vehicles that differ, it takes the reference's place and the history since the first
 * time is told anew. One and the same vehicle, however often it comes, leaves the field at the reference or at one
 * other field, never at several.
 */
export function watchReference(g: Group, n: Node, step: Step, atMs: number): void {
	const { slow } = n;
	if (!doubtful(n)) {
		if (slow.strange !== null) forget(n);
		return;
	}
	if (slow.strange === null) {
		if (step.became === 'arrival') {
			slow.strange = {
				visits: 1,
				out: null,
				first: null,
				differ: false,
				moves: [move('empty', step)],
				entries: []
			};
			slow.strange.entries.push({ type: 'arrival', atMs: step.atMs });
			touch(n);
		}
		return;
	}
	if (slow.strange.out === null) leave(n, slow.strange, step);
	else comeBack(g, n, slow.strange, step, atMs);
}

const move = (to: 'empty' | 'taken', step: Step): Strange['moves'][number] => ({
	to,
	atMs: step.atMs,
	uncertaintyS: step.uncertaintyS
});

function forget(n: Node): void {
	n.slow.strange = null;
	touch(n);
}

function leave(n: Node, strange: Strange, step: Step): void {
	if (size3(step.j) < VEHICLE_ON * onMg(n)) return;
	if (strange.moves.length >= MOST_MOVES || atReference(n, n.fast.level)) {
		forget(n);
		return;
	}
	n.slow.strange = { ...strange, out: step.j, moves: [...strange.moves, move('taken', step)] };
	touch(n);
}

function comeBack(g: Group, n: Node, strange: Strange, step: Step, atMs: number): void {
	const out = strange.out ?? step.j;
	const same = Math.max(n.params.returnMg, SAME_SHARE * size3(out));
	touch(n);
	if (sumSize(out, step.j) > same) {
		n.slow.strange = { ...strange, out: summed(out, step.j) };
		return;
	}
	const visits = strange.visits + 1;
	const full = strange.moves.length >= MOST_MOVES;
	const first = strange.first ?? floats(out);
	const back: Strange = {
		...strange,
		visits,
		out: null,
		first,
		differ: strange.differ || apart(out, first) > OTHER_SHARE * size3(first),
		moves: [...strange.moves, move('empty', step)]
	};
	n.slow.strange = full ? strange : back;
	const { swapVisits } = n.params;
	if (swapVisits > 0 && visits >= swapVisits && back.differ) swap(g, n, back, atMs);
	else if (visits >= DOUBT_VISITS) doubtIt(n, HOLDS_VEHICLE, atMs);
}

/** The field that keeps coming back is the empty bay's: reference and history are put right. */
function swap(g: Group, n: Node, strange: Strange, atMs: number): void {
	const { slow, fast } = n;
	const old = slow.reference;
	if (old === null) return;
	const learned = {
		learnedAtMs: atMs,
		fieldMg: triple(fast.level),
		sigmaMg: old.sigmaMg,
		tempC: Number.isNaN(fast.tempC) ? null : fast.tempC,
		offsetMg: slow.offset,
		readings: fast.boxN
	};
	slow.strange = null;
	slow.reference = { ...learned, acceptedAtMs: atMs, provisional: true };
	slow.returns = 0;
	slow.doubt = null;
	g.out.push({ kind: 'learned', nodeId: n.id, reference: learned });
	g.out.push({ kind: 'accepted', nodeId: n.id, atMs, provisional: true, by: 'rule' });
	tellAnew(g, n, strange, old.acceptedAtMs, atMs);
	set3(fast.baseline, fast.level);
	fast.baselineTempC = fast.tempC;
	fast.stayMg = 0;
	slow.arrival = null;
	slow.echoes = [];
	slow.steps = [];
}

const WHY = 'the reference was learned with a vehicle on the bay';

function tellAnew(g: Group, n: Node, strange: Strange, acceptedAtMs: number, atMs: number): void {
	for (const e of strange.entries) voidEntry(g, n, e.type, e.atMs, atMs, WHY);
	voidEntry(g, n, 'known', acceptedAtMs, atMs, WHY);
	const confidence = carriedConfidence(n);
	const said = evidence([
		`${WHY}; its empty field has come back ${strange.visits.toString()} times`
	]);
	const base = { confidence, evidence: said };
	enter(
		g,
		n,
		{ ...base, type: 'known', state: 'occupied', atMs: acceptedAtMs, uncertaintyS: 0 },
		atMs
	);
	for (const m of strange.moves) {
		const [type, state] =
			m.to === 'empty' ? (['departure', 'vacant'] as const) : (['arrival', 'occupied'] as const);
		enter(g, n, { ...base, type, state, atMs: m.atMs, uncertaintyS: m.uncertaintyS }, atMs);
	}
}
