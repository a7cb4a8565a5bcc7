import { atSilence, heardAgain, takeClipped } from './silence';
import { takeInversion } from './film';
import { keepHouse } from './housekeeping';
import { learn } from './learning';
import { noteStrongField, revealVehicle, takeMagnet } from './magnet';
import { hold, resolve } from './neighbours';
import { addPass } from './passes';
import { settleAfterPulse } from './pulses';
import { watchSlowCrossing } from './slow-crossing';
import { moveUp } from './queue';
import type { Group, Node, Step } from './state';
import { followTemperature } from './temperature';
import { disturbanceMg, gapMs, offMg, onMg, stillMg, trackNoise } from './thresholds';
import type { RowItem } from './types';
import { apart, axisApart } from './vec';

const MS_PER_S = 1000;
/** The level is a running mean of this many still readings at most. */
const LEVEL_READINGS = 8;
/** Readings that must agree before the baseline takes one in (method 3). */
const STILL_READINGS = 3;
/** Rows nearer than this belong to one burst. */
const BURST_MS = 5000;
/** After a silence the baseline is moved as if no more than this had passed. */
const LONGEST_DT_MS = 600_000;

/** Advances a node by one row (method 1 to 4). */
export function takeRow(g: Group, n: Node, row: RowItem): void {
	const { fast, slow } = n;
	const atMs = Math.max(row.atMs, fast.lastAtMs);
	const dtMs = fast.lastAtMs === 0 ? 0 : atMs - fast.lastAtMs;
	if (row.clipped || overFilm(n, row)) {
		takeClipped(g, n, atMs, row.clipped);
		fast.lastAtMs = atMs;
		return;
	}
	const p = row.polarity;
	fast.polarity = p;
	const offset = slow.offset ?? ZERO;
	const { last } = fast;
	const { signs } = slow;
	const x = Math.fround(p * signs[0] * (row.rawMg[0] - offset[0]));
	const y = Math.fround(p * signs[1] * (row.rawMg[1] - offset[1]));
	const z = Math.fround(p * signs[2] * (row.rawMg[2] - offset[2]));
	const dx = x - last[0];
	const dy = y - last[1];
	const dz = z - last[2];
	last[0] = x;
	last[1] = y;
	last[2] = z;
	if (row.tempC !== null) followTemperature(n, row.tempC, dtMs);
	if (fast.clippedRun > 0) fast.clippedRun = 0;
	if (fast.levelN === 0) startLevel(n, atMs);
	else if (atMs < fast.quietUntilMs) extendBox(n, atMs);
	else if (slow.learning || slow.reference === null) learnRow(g, n, atMs, dtMs, dx, dy, dz);
	else inService(g, n, atMs, dtMs, dx, dy, dz);
	fast.lastAtMs = atMs;
	if (atMs >= fast.checkAtMs) keepHouse(g, n, atMs);
}

/** A magnet seen through the film that it has just weakened reads lower than it is. */
const WEAKENED = 0.5;

function pastHalfFilm(n: Node): boolean {
	const { last, openClipped } = n.fast;
	const limit = WEAKENED * n.member.profile.filmSafeMg;
	const high = Math.max(Math.abs(last[0]), Math.abs(last[1]), Math.abs(last[2]));
	return high > limit && openClipped < MAGNET_ROWS;
}

const ZERO = [0, 0, 0] as const;

const overFilm = (n: Node, row: RowItem): boolean => {
	const limit = n.member.profile.filmSafeMg;
	return (
		Math.abs(row.rawMg[0]) > limit ||
		Math.abs(row.rawMg[1]) > limit ||
		Math.abs(row.rawMg[2]) > limit
	);
};

function startLevel(n: Node, atMs: number): void {
	const { fast } = n;
	for (const i of [0, 1, 2] as const) fast.level[i] = fast.last[i];
	fast.levelN = 1;
	fast.boxN = 0;
	extendBox(n, atMs);
}

function learnRow(
	g: Group,
	n: Node,
	atMs: number,
	dtMs: number,
	dx: number,
	dy: number,
	dz: number
): void {
	extendBox(n, atMs);
	if (n.fast.boxN > 1 && dtMs > 0) trackNoise(n, dx, dy, dz);
	if (n.fast.boxN >= STILL_READINGS) meanOfBox(n);
	if (n.slow.learning) learn(g, n, atMs);
}

function inService(
	g: Group,
	n: Node,
	atMs: number,
	dtMs: number,
	dx: number,
	dy: number,
	dz: number
): void {
	const { fast } = n;
	if (dtMs > gapMs(n)) atSilence(g, n, atMs, dtMs);
	if (fast.reanchor === 1) {
		extendBox(n, atMs);
		if (fast.boxN >= 2) settleAfterPulse(g, n, atMs);
		return;
	}
	if (fast.open === 1) {
		const rested = dtMs > BURST_MS && fast.boxN >= STILL_READINGS;
		if (!rested) {
			continueStep(g, n, atMs);
			return;
		}
		settle(g, n, atMs);
	}
	const still = stillMg(n);
	const { last, level } = fast;
	if (
		Math.abs(last[0] - level[0]) <= still &&
		Math.abs(last[1] - level[1]) <= still &&
		Math.abs(last[2] - level[2]) <= still
	) {
		if (n.slow.unknownWhy !== null) heardAgain(g, n, atMs);
		quiet(n, atMs, dtMs, dx, dy, dz, still);
	} else begin(g, n, atMs, dtMs);
}

/** A reading on the level: noise, level, baseline and the stay's size follow. */
function quiet(
	n: Node,
	atMs: number,
	dtMs: number,
	dx: number,
	dy: number,
	dz: number,
	still: number
): void {
	const { fast, slow, params } = n;
	trackNoise(n, dx, dy, dz);
	extendBoxBy(n, atMs, still);
	if (fast.levelN < LEVEL_READINGS) fast.levelN++;
	const share = 1 / fast.levelN;
	const { level, last, baseline } = fast;
	level[0] += share * (last[0] - level[0]);
	level[1] += share * (last[1] - level[1]);
	level[2] += share * (last[2] - level[2]);
	const d = apart(last, baseline);
	if (slow.state === 'occupied') {
		const step = Math.max(0.2, 0.01 * fast.stayMg);
		fast.stayMg = Math.fround(fast.stayMg + (d > fast.stayMg ? step : -step));
		return;
	}
	if (slow.state !== 'vacant' || slow.aisle !== null || fast.boxN < STILL_READINGS) return;
	watchSlowCrossing(n, d, atMs);
	if (d >= onMg(n)) return;
	let take = 1 - Math.exp(-Math.min(dtMs, LONGEST_DT_MS) / (params.baselineTauS * MS_PER_S));
	if (fast.rebase > 0) {
		take = Math.max(take, 1 / (5 - fast.rebase));
		fast.rebase--;
	}
	fast.baselineTempC = fast.tempC;
	baseline[0] += take * (last[0] - baseline[0]);
	baseline[1] += take * (last[1] - baseline[1]);
	baseline[2] += take * (last[2] - baseline[2]);
}

const extendBox = (n: Node, atMs: number): void => {
	extendBoxBy(n, atMs, stillMg(n));
};

/** Takes the reading into the box of still readings, or starts a new box with it. */
function extendBoxBy(n: Node, atMs: number, side: number): void {
	const { boxMin, boxMax, boxSum, last } = n.fast;
	let starts = n.fast.boxN === 0;
	for (let i = 0 as 0 | 1 | 2; i < 3; i++) {
		const v = last[i];
		if (Math.max(boxMax[i], v) - Math.min(boxMin[i], v) > side) starts = true;
	}
	for (let i = 0 as 0 | 1 | 2; i < 3; i++) {
		const v = last[i];
		boxMin[i] = starts ? v : Math.min(boxMin[i], v);
		boxMax[i] = starts ? v : Math.max(boxMax[i], v);
		boxSum[i] = starts ? v : boxSum[i] + v;
	}
	if (starts) n.fast.boxFromMs = atMs;
	n.fast.boxN = starts ? 1 : n.fast.boxN + 1;
}

/** A reading off the level: a step opens. */
function begin(g: Group, n: Node, atMs: number, dtMs: number): void {
	const { fast } = n;
	fast.open = 1;
	fast.openOldAtMs = fast.lastAtMs;
	fast.openNewAtMs = atMs;
	fast.openGap = dtMs > gapMs(n) ? 1 : 0;
	fast.openClipped = 0;
	fast.openLow = 0;
	fast.openN = 0;
	fast.peakMg = 0;
	fast.crossAtMs = 0;
	fast.visibleAtMs = atMs;
	fast.boxN = 0;
	g.active++;
	if (n.slow.pending !== null) resolve(g, n, atMs, 'forced');
	continueStep(g, n, atMs);
}

/** A movement under this share of what follows is not its beginning. */
const SLIGHT = 0.25;

function continueStep(g: Group, n: Node, atMs: number): void {
	const { fast } = n;
	fast.openN++;
	if (fast.openN > 1 && isBack(n, atMs)) {
		closePass(g, n, atMs);
		return;
	}
	extendBox(n, atMs);
	const offLevel = apart(fast.last, fast.level);
	if (fast.peakMg < SLIGHT * offLevel) {
		// What came before was slight: the movement that counts begins here.
		fast.openOldAtMs = fast.lastAtMs;
		fast.openNewAtMs = atMs;
		fast.openN = 1;
	}
	fast.peakMg = Math.fround(Math.max(fast.peakMg, offLevel));
	if (pastHalfFilm(n)) fast.openClipped++;
	else if (fast.openClipped < MAGNET_ROWS) fast.openClipped = 0;
	if (n.slow.aisle !== null && disturbanceMg(n) < offMg(n)) fast.openLow = 1;
	noteCrossing(n, atMs);
	if (fast.boxN >= 2 && atMs - fast.boxFromMs >= n.params.stillS * MS_PER_S) settle(g, n, atMs);
}

/** A movement this small, or one that a beat finds over, needs no hold to be called past. */
const SMALL_MOVES = 2;
const ALONE_MS = 10_000;

function isBack(n: Node, atMs: number): boolean {
	const { fast } = n;
	const still = stillMg(n);
	if (axisApart(fast.last, fast.level) > still || fast.openClipped > 0) return false;
	return fast.peakMg <= SMALL_MOVES * still || atMs - fast.lastAtMs >= ALONE_MS;
}

/** Back on the old level without a hold. */
function closePass(g: Group, n: Node, atMs: number): void {
	const { fast } = n;
	fast.open = 0;
	fast.visibleAtMs = atMs;
	fast.boxN = 0;
	extendBox(n, atMs);
	g.active--;
	passed(g, n, atMs);
}

/** First crossing: over on when vacant, away from the vehicle's level by half of it when occupied. */
function noteCrossing(n: Node, atMs: number): void {
	const { fast, slow } = n;
	if (fast.crossAtMs > 0) return;
	const crossed =
		slow.state === 'occupied'
			? apart(fast.last, fast.level) >= Math.max(offMg(n), fast.stayMg / 2)
			: apart(fast.last, fast.baseline) >= onMg(n);
	if (!crossed) return;
	fast.crossAtMs = atMs;
	fast.crossOldAtMs = fast.lastAtMs;
}

function meanOfBox(n: Node): void {
	const { level, boxSum, boxN } = n.fast;
	level[0] = boxSum[0] / boxN;
	level[1] = boxSum[1] / boxN;
	level[2] = boxSum[2] / boxN;
}

/** An axle may pass the film's limit for a row or two; a magnet stays. */
const MAGNET_ROWS = 3;

/** The field is still again: back on the old level (a pass), or on a new one (a step). */
function settle(g: Group, n: Node, atMs: number): void {
	const { fast } = n;
	const old = [fast.level[0], fast.level[1], fast.level[2]] as [number, number, number];
	meanOfBox(n);
	fast.levelN = Math.min(LEVEL_READINGS, fast.boxN);
	fast.open = 0;
	fast.visibleAtMs = atMs;
	g.active--;
	const step = makeStep(n, old, atMs);
	const moved = Math.max(Math.abs(step.j[0]), Math.abs(step.j[1]), Math.abs(step.j[2]));
	if (moved <= stillMg(n)) {
		pass(g, n, step, atMs);
		return;
	}
	revealVehicle(g, n, step, atMs);
	if (takeMagnet(n, step) || takeInversion(n, step)) {
		if (n.slow.unknownWhy !== null) heardAgain(g, n, atMs);
	} else hold(g, n, step, atMs);
}

function pass(g: Group, n: Node, step: Step, atMs: number): void {
	if (step.clipped) noteStrongField(n, step);
	passed(g, n, atMs);
}

/** A movement that came back: neighbours that wait for it may go on. */
function passed(g: Group, n: Node, atMs: number): void {
	addPass(n);
	if (n.fast.openLow === 1) moveUp(n, atMs);
	if (n.slow.unknownWhy !== null) heardAgain(g, n, atMs);
	n.fast.decidedAtMs = atMs;
	for (const m of n.near) {
		if (m.slow.pending === null) continue;
		m.fast.decidedAtMs = atMs;
		resolve(g, m, atMs, 'neighbour');
	}
}

function makeStep(n: Node, old: [number, number, number], atMs: number): Step {
	const { fast, params } = n;
	const { level } = fast;
	const j: [number, number, number] = [level[0] - old[0], level[1] - old[1], level[2] - old[2]];
	const burst = fast.openNewAtMs < atMs && atMs - fast.openNewAtMs <= (fast.openN - 1) * BURST_MS;
	const fromMs = burst
		? Math.max(fast.openOldAtMs, fast.openNewAtMs - params.onsetS * MS_PER_S)
		: fast.openOldAtMs;
	const crossed = fast.crossAtMs > 0 && burst;
	const sharpFromMs = crossed ? Math.max(fast.crossOldAtMs, fromMs) : fromMs;
	const untilMs = crossed ? fast.crossAtMs : fast.openNewAtMs;
	const time = crossed || burst ? untilMs : (sharpFromMs + untilMs) / 2;
	const spread = crossed || burst ? untilMs - sharpFromMs : (untilMs - sharpFromMs) / 2;
	return {
		j,
		fromMs,
		toMs: fast.boxFromMs,
		newMs: fast.openNewAtMs,
		burst,
		atMs: Math.round(time),
		uncertaintyS: Math.max(1, Math.round(spread / MS_PER_S)),
		settledMs: atMs,
		gapS: fast.openGap === 1 ? Math.round((fast.boxFromMs - fast.openOldAtMs) / MS_PER_S) : 0,
		riseS: burst
			? Math.max(1, Math.round((fast.boxFromMs - fromMs) / MS_PER_S))
			: Math.round((fast.openNewAtMs - fast.openOldAtMs) / MS_PER_S),
		peakMg: fast.peakMg,
		clipped: fast.openClipped >= MAGNET_ROWS,
		became: 'pending',
		before: null
	};
}
