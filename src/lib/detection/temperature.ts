import { LEAST_SE, slopeOf } from './slope';
import { touch, type Node, type Slope, type Triple } from './state';
import { offMg } from './thresholds';
import { apart, shift3 } from './vec';

/** Temperature registers are coarse: smoothed over this. */
const SMOOTH_MS = 300_000;
const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;

/** Smooths the temperature and moves the baseline along the known slope, vacant or occupied. */
export function followTemperature(n: Node, tempC: number, dtMs: number): void {
	const { fast, slow } = n;
	if (Number.isNaN(fast.tempC)) fast.tempC = Math.fround(tempC);
	else fast.tempC = Math.fround(fast.tempC + (dtMs / (dtMs + SMOOTH_MS)) * (tempC - fast.tempC));
	if (slow.slope === null) return;
	const deltaC = fast.tempC - fast.baselineTempC;
	if (!Number.isNaN(deltaC)) shift3(fast.baseline, slow.slope.k, deltaC);
	fast.baselineTempC = fast.tempC;
}

const WINDOW = 26;
/** The slope is worked out anew at every so many samples, the first one sooner: triples are cubic. */
const EVERY = 6;
const FIRST_EVERY = 2;

/** Takes the present level into the day's samples, once an hour. */
export function sampleHour(n: Node, atMs: number): void {
	const { fast, slow } = n;
	if (Number.isNaN(fast.tempC) || slow.state === 'unknown' || slow.aisle !== null) return;
	if (slow.state === 'vacant' && apart(fast.level, fast.baseline) > offMg(n)) return;
	const stay = slow.state === 'vacant' ? 0 : slow.stayNo;
	const echoes = slow.echoes.reduce<Triple>(
		(sum, e) => [sum[0] + e.j[0], sum[1] + e.j[1], sum[2] + e.j[2]],
		[0, 0, 0]
	);
	const { level } = fast;
	slow.hours.push([
		atMs,
		fast.tempC,
		Math.fround(level[0] - echoes[0]),
		Math.fround(level[1] - echoes[1]),
		Math.fround(level[2] - echoes[2]),
		stay
	]);
	slow.hours = slow.hours.filter((h) => atMs - h[0] <= DAY_MS + HOUR_MS).slice(-WINDOW);
	touch(n);
	slow.sampled++;
	if (slow.sampled % (slow.slope === null ? FIRST_EVERY : EVERY) === 0) learnSlope(n);
}

/** A slope fades with days so that a new film or offset is learned again. */
const KEEP = 0.8;

function learnSlope(n: Node): void {
	const { slow } = n;
	const fresh = slopeOf(slow.hours);
	if (fresh === null || Math.max(...fresh.se) > n.params.slopeSeMgPerC) return;
	slow.slope = slow.slope === null ? fresh : blend(slow.slope, fresh);
	n.fast.baselineTempC = n.fast.tempC;
}

function blend(old: Slope, fresh: Slope): Slope {
	const mixed = { k: [0, 0, 0] as Triple, se: [0, 0, 0] as Triple, triples: fresh.triples };
	for (const i of [0, 1, 2] as const) {
		const wOld = KEEP / (old.se[i] * old.se[i]);
		const wNew = 1 / (fresh.se[i] * fresh.se[i]);
		mixed.k[i] = (wOld * old.k[i] + wNew * fresh.k[i]) / (wOld + wNew);
		mixed.se[i] = Math.max(LEAST_SE, 1 / Math.sqrt(wOld + wNew));
	}
	return mixed;
}
