import { median } from '$lib/numeric/quantile';
import { countsToMg } from '$lib/magnetics/counts';
import { builtInProfile } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';
import type { Generated } from '../../../simulator/generate';
import { inEventOrder, type GeneratedRow } from '../../../simulator/items';
import { gradeSaid, type SaidChange, type Score } from '../support/grade';
import { inServerOrder } from '../support/server-times';
import { adaptiveThreshold } from './adaptive-threshold';
import { crossCorrelation } from './cross-correlation';
import { fixedAxis } from './fixed-axis';
import { fixedMagnitude } from './fixed-magnitude';
import type { PublishedDetector, PublishedMethod } from './method';

export const PUBLISHED: readonly PublishedMethod[] = [
	fixedAxis,
	fixedMagnitude,
	adaptiveThreshold,
	crossCorrelation
];

/** Readings of commissioning from which a detector is calibrated. */
const CALIBRATION_MS = 4 * 60_000;

interface Running {
	detector: PublishedDetector;
	said: SaidChange[];
}

/** What a published detector gets of a row: polarity and the offset of the first pair taken out. */
function fieldOf(row: GeneratedRow, offsetMg: Vec3, scale: { countsPerGauss: number }): Vec3 {
	const raw = countsToMg(row.counts, scale);
	const p = row.polarity;
	return [p * (raw[0] - offsetMg[0]), p * (raw[1] - offsetMg[1]), p * (raw[2] - offsetMg[2])];
}

function firstOffset(
	generated: Generated,
	nodeIndex: number,
	scale: { countsPerGauss: number }
): Vec3 {
	for (const frame of generated.logs[nodeIndex]!.others.values()) {
		if (frame.kind !== 'pair') continue;
		const [s, r] = [countsToMg(frame.set, scale), countsToMg(frame.reset, scale)];
		return [(s[0] + r[0]) / 2, (s[1] + r[1]) / 2, (s[2] + r[2]) / 2];
	}
	return [0, 0, 0];
}

function runNode(generated: Generated, at: Float64Array, nodeIndex: number): Running[] {
	const { plan, truth } = generated;
	const node = plan.nodes[nodeIndex]!;
	const scale = builtInProfile(node.profileCode)!;
	const offsetMg = firstOffset(generated, nodeIndex, scale);
	const quiet: Vec3[] = [];
	let running: Running[] = [];
	for (const item of inEventOrder(generated, [nodeIndex], () => (m) => at[m]!)) {
		if (item.kind !== 'row') continue;
		const fieldMg = fieldOf(item, offsetMg, scale);
		if (item.atMs < truth.fromMs + CALIBRATION_MS) {
			quiet.push(fieldMg);
			continue;
		}
		if (running.length === 0) running = PUBLISHED.map((method) => start(method, quiet));
		for (const { detector, said } of running) {
			const change = detector.take({ atMs: item.atMs, fieldMg });
			if (change === null) continue;
			said.push({
				bay: String(node.bayIndex),
				...change,
				uncertaintyS: generated.scenario.periodS / 2,
				evidence: ''
			});
		}
	}
	return running;
}

function start(method: PublishedMethod, quiet: readonly Vec3[]): Running {
	const axis = (i: 0 | 1 | 2) => median(quiet.map((field) => field[i]));
	return { detector: method.start([axis(0), axis(1), axis(2)]), said: [] };
}

/** Grades every published method on the same rows that ours gets; by place in PUBLISHED. */
export function gradePublished(generated: Generated): Score[] {
	const { ordered, times } = inServerOrder(generated);
	const byNode = times.map((at, nodeIndex) => runNode(ordered, at, nodeIndex));
	return PUBLISHED.map((_, which) => {
		const saidOf = (bayIndex: number): SaidChange[] => {
			const nodeIndex = generated.plan.nodes.findIndex((node) => node.bayIndex === bayIndex);
			return byNode[nodeIndex]?.[which]?.said ?? [];
		};
		return gradeSaid(generated, saidOf, (bayIndex) => [
			{ atMs: generated.truth.fromMs, state: 'vacant' },
			...saidOf(bayIndex).map(({ atMs, type }) => ({
				atMs,
				state: type === 'arrival' ? ('occupied' as const) : ('vacant' as const)
			}))
		]);
	});
}
