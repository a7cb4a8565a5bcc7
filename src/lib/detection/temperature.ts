import { touch, type HourSample, type Node, type Slope, type Triple } from './state';
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
/** The slope is worked out anew at every so many samples: triples are cubic. */
const EVERY = 4;

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
	if (slow.sampled % EVERY === 0) learnSlope(n);
}

/** Triples need this much of their own temperature movement (method 5.1), °C. */
const LEAST_C = 2;
const LEAST_TRIPLES = 20;

/**
 * Slope k per axis: median over triples of hours i < j < k of (B_j - line(B_i, B_k)) / (T_j - line(T_i, T_k)),
 * exact against any drift linear over the day (method 5.1). Standard error 1.858 MAD / √(samples).
 */
function slopeOf(hours: readonly HourSample[]): Slope | null {
	const found: number[][] = [[], [], []];
	for (let i = 0; i < hours.length; i++) {
		for (let k = i + 2; k < hours.length; k++) {
			for (let j = i + 1; j < k; j++) takeTriple(hours, i, j, k, found);
		}
	}
	const triples = found[0]?.length ?? 0;
	if (triples < LEAST_TRIPLES) return null;
	const fits = found.map((values) => centre(values, hours.length));
	return {
		k: fits.map((f) => f.median) as Triple,
		se: fits.map((f) => f.se) as Triple,
		triples
	};
}

function takeTriple(
	hours: readonly HourSample[],
	i: number,
	j: number,
	k: number,
	found: number[][]
): void {
	const [a, b, c] = [hours[i], hours[j], hours[k]];
	if (a === undefined || b === undefined || c === undefined) return;
	if (a[5] !== b[5] || b[5] !== c[5]) return;
	const w = (b[0] - a[0]) / (c[0] - a[0]);
	const deltaC = b[1] - (a[1] + w * (c[1] - a[1]));
	if (Math.abs(deltaC) < LEAST_C) return;
	found[0]?.push((b[2] - (a[2] + w * (c[2] - a[2]))) / deltaC);
	found[1]?.push((b[3] - (a[3] + w * (c[3] - a[3]))) / deltaC);
	found[2]?.push((b[4] - (a[4] + w * (c[4] - a[4]))) / deltaC);
}

const MAD_TO_SIGMA = 1.4826;
/** √(π/2): a median is that much less steady than a mean. */
const MEDIAN_LOSS = 1.2533;

function centre(values: number[], independent: number): { median: number; se: number } {
	const sorted = values.sort((a, b) => a - b);
	const median = sorted[sorted.length >> 1] ?? 0;
	const spread = sorted.map((v) => Math.abs(v - median)).sort((a, b) => a - b);
	const mad = spread[spread.length >> 1] ?? 0;
	const se = (MAD_TO_SIGMA * MEDIAN_LOSS * mad) / Math.sqrt(Math.max(1, independent / 3));
	return { median, se: Math.max(se, LEAST_SE) };
}

/** A slope is never known better than this, mG/°C: lag of the ground behind the board. */
const LEAST_SE = 0.03;
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
