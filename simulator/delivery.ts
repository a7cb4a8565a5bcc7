import type { Sent } from './node-state';
import type { Random } from './random';

/** What lies between node and server. */
export interface Network {
	lossShare: number;
	duplicateShare: number;
	/** Share of messages held back on the way, and for how long at most, ms. */
	reorderShare: number;
	reorderMs: number;
	/** Stretches in which a node is not heard: it keeps its messages and sends them afterwards. */
	outagesPerWeek: number;
	outageMs: readonly [number, number];
	/** Share of messages that come a day late. */
	dayLateShare: number;
	/** Bursts never come through: only rows of the regular beat are heard. */
	heartbeatsOnly: boolean;
}

export const GOOD_NETWORK: Network = {
	lossShare: 0,
	duplicateShare: 0,
	reorderShare: 0,
	reorderMs: 0,
	outagesPerWeek: 0,
	outageMs: [0, 0],
	dayLateShare: 0,
	heartbeatsOnly: false
};

export interface Outage {
	fromMs: number;
	toMs: number;
}

/** A message as it reaches the server. */
export interface Delivered extends Sent {
	arrivedAtMs: number;
}

export interface DeliveryFacts {
	sent: number;
	lost: number;
	duplicated: number;
	reordered: number;
	late: number;
	backlog: number;
}

const WEEK_MS = 7 * 86_400_000;
const DAY_MS = 86_400_000;
const BACKLOG_STEP_MS = 120;

export function drawOutages(rng: Random, network: Network, fromMs: number, toMs: number): Outage[] {
	const outages: Outage[] = [];
	if (network.outagesPerWeek <= 0) return outages;
	let atMs = fromMs;
	for (;;) {
		atMs += rng.exponential(WEEK_MS / network.outagesPerWeek);
		if (atMs >= toMs) return outages;
		const endMs = atMs + rng.between(...network.outageMs);
		outages.push({ fromMs: atMs, toMs: Math.min(endMs, toMs) });
		atMs = endMs;
	}
}

/** Carries one node's messages to the server; `mustArrive` are never lost (commissioning). */
export function deliver(
	sent: readonly Sent[],
	network: Network,
	outages: readonly Outage[],
	mustArriveUntilMs: number,
	rng: Random,
	facts: DeliveryFacts
): Delivered[] {
	const delivered: Delivered[] = [];
	let outageNext = 0;
	let backlog = 0;
	for (const message of sent) {
		facts.sent++;
		const spared = message.sentAtMs < mustArriveUntilMs;
		if (!spared && rng.chance(network.lossShare)) {
			facts.lost++;
			continue;
		}
		let arrivedAtMs = message.sentAtMs + Math.round(rng.between(40, 600));
		while ((outages[outageNext]?.toMs ?? Infinity) <= message.sentAtMs) {
			outageNext++;
			backlog = 0;
		}
		const outage = outages[outageNext];
		if (outage !== undefined && outage.fromMs <= message.sentAtMs) {
			arrivedAtMs = Math.round(outage.toMs + backlog++ * BACKLOG_STEP_MS);
			facts.backlog++;
		} else if (!spared && rng.chance(network.reorderShare)) {
			arrivedAtMs += Math.round(rng.between(1000, network.reorderMs));
			facts.reordered++;
		} else if (!spared && rng.chance(network.dayLateShare)) {
			arrivedAtMs += Math.round(DAY_MS * rng.between(0.8, 1.2));
			facts.late++;
		}
		delivered.push({ ...message, arrivedAtMs });
		if (rng.chance(network.duplicateShare)) {
			facts.duplicated++;
			delivered.push({ ...message, arrivedAtMs: arrivedAtMs + Math.round(rng.between(5, 90_000)) });
		}
	}
	return delivered;
}
