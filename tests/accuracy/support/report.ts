import { calibration, type Judged } from '$lib/accuracy/calibration';
import type { TimeCount } from '$lib/accuracy/time-share';
import { wilson } from '$lib/numeric/wilson';
import { PUBLISHED } from '../published/run';
import { addScores, figuresOf, type Score } from './grade';
import type { Round } from './round';

/** What the columns of node_fast and node_slow take (store/schema/node.ts). */
export const FAST_BYTES = 300;
export const SLOW_BYTES = 4096;

const f4 = (share: number | null): string => (share === null ? '—' : share.toFixed(4));
const percent = (share: number): string => `${(100 * share).toFixed(2)} %`;

function limits(hits: number, n: number): string {
	const w = wilson(hits, n);
	return w === null ? '' : `[${w.low.toFixed(4)}, ${w.high.toFixed(4)}]`;
}

function shareOf({ rightMs, wrongMs, unknownMs }: TimeCount): number {
	const all = rightMs + wrongMs + unknownMs;
	return all === 0 ? 1 : rightMs / all;
}

/** Share of all time in the right state; not known counts as wrong. */
export const rightShare = ({ time }: Score): number => shareOf(time);

/** The most that the rows heard allow (oracle.ts); published methods are not held against it. */
const bound = ({ oracle }: Score): string =>
	oracle.rightMs === 0 ? '' : ` of ${percent(shareOf(oracle))} that could be known`;

export function scoreLine(name: string, score: Score): string {
	const { precision, recall, f1 } = figuresOf(score);
	const { hits, truths, falses } = score;
	const apart = Object.entries(score.apart).map(([why, n]) => `${n} ${why}`);
	return [
		name.padEnd(30),
		`F1 ${f4(f1)}`,
		`precision ${f4(precision)} ${limits(hits, hits + falses)}`,
		`recall ${f4(recall)} ${limits(hits, truths)}`,
		`events ${truths}`,
		`missed ${truths - hits}`,
		`false ${falses}`,
		`(${(falses / score.nodeWeeks).toFixed(3)} a node and week)`,
		`right ${percent(rightShare(score))}${bound(score)}`,
		...(apart.length > 0 ? [`apart: ${apart.join(', ')}`] : [])
	].join('  ');
}

export function detailLines(round: Round): string[] {
	const { judged, rows, detectMs, generateMs } = round;
	const of = (n: number) => percent(judged.looks === 0 ? 0 : n / judged.looks);
	const lines = [
		`   doubtful ${of(judged.doubtful)}  unknown ${of(judged.unknown)}  voided ${round.voided}  within 60 s ${round.score.strictHits}  rows ${rows}  detected at ${Math.round((rows / detectMs) * 1000)}/s, made at ${Math.round((round.facts.rows / generateMs) * 1000)}/s`
	];
	const { underVehicle } = judged;
	if (underVehicle.looks > 0) {
		lines.push(
			`   learned under a vehicle: doubtful in ${underVehicle.doubtful} of ${underVehicle.looks} looks`
		);
	}
	if (round.fastBytes > FAST_BYTES || round.slowBytes > SLOW_BYTES) {
		lines.push(
			`   STORED STATE TOO LONG: fast ${round.fastBytes} of ${FAST_BYTES} B, slow ${round.slowBytes} of ${SLOW_BYTES} B: ingest stands still`
		);
	}
	for (const [why, n] of round.pulsesRefused) lines.push(`   pulses not believed: ${n}, ${why}`);
	return lines;
}

export const missLines = (round: Round, most: number): string[] =>
	round.score.misses.slice(0, most).map(({ kind, type, bayIndex, atMs, why }) => {
		const at = new Date(atMs).toISOString();
		return `   ${kind} ${type} ${round.bays[bayIndex]} (node ${bayIndex}) ${at} ${why}`;
	});

/** Published methods on the same rows, added up over rounds. */
export function publishedLines(rounds: readonly Round[]): string[] {
	return PUBLISHED.map((method, which) => {
		const scores = rounds.flatMap((round) => round.published[which] ?? []);
		return scoreLine(`  ${method.name}`, addScores(scores));
	});
}

/** Reliability table of confidences in tenths, with Brier score and skill (method 4). */
export function reliabilityLines(title: string, judged: readonly Judged[], seed: number): string[] {
	const found = calibration(judged, seed);
	if (found === null) return [`${title}: nothing judged`];
	const skill = found.skill === null ? '—' : found.skill.toFixed(3);
	return [
		`${title}: n ${found.n}  Brier ${found.brier.toFixed(5)}  skill ${skill}  median confidence of wrong states ${f4(found.medianConfidenceOfWrong)}`,
		...found.tenths.map((tenth) => {
			const l = tenth.limits;
			const range = l === null ? '' : `[${l.low.toFixed(4)}, ${l.high.toFixed(4)}]`;
			return `   from ${tenth.from.toFixed(1)}: said ${tenth.meanConfidence.toFixed(4)}  came ${tenth.observed.toFixed(4)} ${range}  n ${tenth.n}  ${tenth.holds ? 'holds' : 'DOES NOT HOLD'}`;
		})
	];
}

/** What was said and what came where the method caps the confidence (provisional, carried under a vehicle). */
export function cappedLine(judged: readonly Judged[]): string[] {
	const n = judged.length;
	if (n === 0) return [];
	const said = judged.reduce((sum, { confidence }) => sum + confidence, 0) / n;
	const right = judged.filter((one) => one.right).length;
	return [
		`confidence under a cap: n ${n}  said at most ${said.toFixed(4)}  came ${(right / n).toFixed(4)} ${limits(right, n)}`
	];
}

/** One JSON line a scenario for whoever reads benches by program. */
export function jsonLine(name: string, seeds: readonly number[], score: Score): string {
	const { precision, recall, f1 } = figuresOf(score);
	return JSON.stringify({
		bench: 'accuracy',
		scenario: name,
		seeds,
		events: score.truths,
		precision,
		recall,
		f1,
		missed: score.truths - score.hits,
		false: score.falses,
		falsePerNodeWeek: score.falses / score.nodeWeeks,
		right: rightShare(score),
		rightBound: shareOf(score.oracle),
		apart: score.apart
	});
}
