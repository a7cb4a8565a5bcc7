import { builtInProfile } from '$lib/magnetics/sensor-profile';
import type { Generated } from '../../../simulator/generate';
import type { Stay } from '../../../simulator/truth';

/** A stretch of one bay's time that method 11 has reported apart, and why. */
export interface ApartWindow {
	fromMs: number;
	toMs: number;
	why: string;
}

const MINUTE_MS = 60_000;
/** A witness row lies at most one long heartbeat before or a pass after the magnet. */
const BEFORE_MS = 130_000;
const AFTER_MS = 10_000;
const PERIODS = 3;

export const staysOf = (stays: readonly Stay[], bayIndex: number): Stay[] =>
	stays.filter((stay) => stay.bayIndex === bayIndex).sort((a, b) => a.fromMs - b.fromMs);

/** True when a row that came through shows an overload, or a field past what the film bears. */
function witnessed(generated: Generated, nodeIndex: number, atMs: number): boolean {
	const log = generated.logs[nodeIndex]!;
	const profile = builtInProfile(generated.plan.nodes[nodeIndex]!.profileCode)!;
	const limit = (profile.filmSafeMg * profile.countsPerGauss) / 1000;
	for (const m of generated.deliveries[nodeIndex]!.message) {
		const firstMs = log.firstAtMs.values[m]!;
		if (firstMs < atMs - BEFORE_MS || firstMs > atMs + AFTER_MS) continue;
		const from = log.rowFrom.values[m]! * 3;
		const counts = log.counts.values.subarray(from, from + log.rowCount.values[m]! * 3);
		if (counts.some((count) => Math.abs(count) > limit)) return true;
	}
	return false;
}

/** The next pulse that was heard of; a film left by a magnet is healed by it. */
function nextPulseMs(generated: Generated, nodeIndex: number, atMs: number): number {
	const log = generated.logs[nodeIndex]!;
	const heard = new Set(generated.deliveries[nodeIndex]!.message);
	const pulses = [...log.others.keys()].filter((m) => heard.has(m));
	return Math.min(...pulses.map((m) => log.firstAtMs.values[m]!).filter((ms) => ms > atMs));
}

function magnetWindows(generated: Generated, nodeIndex: number): ApartWindow[] {
	return generated.truth.incidents
		.filter(({ nodeIndex: of, kind }) => of === nodeIndex && kind === 'magnet')
		.filter(({ atMs }) => !witnessed(generated, nodeIndex, atMs))
		.map(({ atMs }) => ({
			fromMs: atMs - MINUTE_MS,
			toMs: nextPulseMs(generated, nodeIndex, atMs) + 5 * MINUTE_MS,
			why: 'magnet without a witness row'
		}));
}

/** Heartbeats only: F1 counts stays and gaps of 3 periods or more (method 11). */
function shortSpans(own: readonly Stay[], leastMs: number): ApartWindow[] {
	const why = 'stay or gap under 3 periods';
	return own.flatMap((stay, i) => {
		const next = own[i + 1];
		const spans = [{ fromMs: stay.fromMs, toMs: stay.toMs, why }];
		if (next !== undefined) spans.push({ fromMs: stay.toMs, toMs: next.fromMs, why });
		return spans.filter(({ fromMs, toMs }) => toMs - fromMs < leastMs);
	});
}

/** What came and went while nothing was heard cannot be known; the state afterwards still counts as time. */
const silentWindows = (generated: Generated, nodeIndex: number): ApartWindow[] =>
	generated.truth.incidents
		.filter(({ nodeIndex: of, kind }) => of === nodeIndex && kind === 'outage')
		.map(({ atMs, toMs }) => ({
			fromMs: atMs - MINUTE_MS,
			toMs: toMs + 2 * MINUTE_MS,
			why: 'while not heard'
		}));

export function apartWindows(generated: Generated, bayIndex: number): ApartWindow[] {
	const { truth, plan, scenario } = generated;
	const nodeIndex = plan.nodes.findIndex((node) => node.bayIndex === bayIndex);
	const own = staysOf(truth.stays, bayIndex);
	const windows = magnetWindows(generated, nodeIndex);
	if (scenario.network.heartbeatsOnly) {
		windows.push(...shortSpans(own, PERIODS * scenario.periodS * 1000));
	}
	if (scenario.network.outageLeaves === 'nothing') {
		windows.push(...silentWindows(generated, nodeIndex));
	}
	const first = own[0];
	if (first !== undefined && first.fromMs < truth.fromMs && first.toMs > truth.judgedFromMs) {
		windows.push({ fromMs: 0, toMs: Infinity, why: 'reference learned under a vehicle' });
	}
	return windows;
}

/** Why an instant is reported apart; null = it counts. */
export const apartAt = (windows: readonly ApartWindow[], atMs: number): string | null =>
	windows.find(({ fromMs, toMs }) => atMs >= fromMs && atMs <= toMs)?.why ?? null;
