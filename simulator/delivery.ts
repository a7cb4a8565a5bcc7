import type { MessageLog } from './message-log';
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
	/** What a node has of an outage afterwards: its messages, or none (its store is small). */
	outageLeaves: 'backlog' | 'nothing';
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
	outageLeaves: 'backlog',
	dayLateShare: 0,
	heartbeatsOnly: false
};

export interface Outage {
	fromMs: number;
	toMs: number;
}

/** What reached the server of one node, in the order in which the node sent it: place in its log, time of arrival. */
export interface Deliveries {
	message: number[];
	arrivedAtMs: number[];
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

/** Carries one node's messages to the server; those before `surelyUntilMs` are never lost (commissioning). */
export function deliver(
	log: MessageLog,
	network: Network,
	outages: readonly Outage[],
	surelyUntilMs: number,
	rng: Random,
	facts: DeliveryFacts
): Deliveries {
	const deliveries: Deliveries = { message: [], arrivedAtMs: [] };
	const arrive = (message: number, atMs: number) => {
		deliveries.message.push(message);
		deliveries.arrivedAtMs.push(Math.round(atMs));
	};
	let next = 0;
	let backlog = 0;
	for (let i = 0; i < log.count; i++) {
		const sentAtMs = log.sentAtMs.values[i]!;
		const sure = sentAtMs < surelyUntilMs;
		facts.sent++;
		if (!sure && rng.chance(network.lossShare)) {
			facts.lost++;
			continue;
		}
		while ((outages[next]?.toMs ?? Infinity) <= sentAtMs) {
			next++;
			backlog = 0;
		}
		const outage = outages[next];
		let atMs = sentAtMs + rng.between(40, 600);
		if (outage !== undefined && outage.fromMs <= sentAtMs) {
			if (network.outageLeaves === 'nothing') {
				facts.lost++;
				continue;
			}
			atMs = outage.toMs + backlog++ * BACKLOG_STEP_MS;
			facts.backlog++;
		} else if (!sure) atMs += detourMs(network, rng, facts);
		arrive(i, atMs);
		if (rng.chance(network.duplicateShare)) {
			facts.duplicated++;
			arrive(i, atMs + rng.between(5, 90_000));
		}
	}
	return deliveries;
}

function detourMs(network: Network, rng: Random, facts: DeliveryFacts): number {
	const draw = rng.uniform();
	if (draw < network.reorderShare) {
		facts.reordered++;
		return rng.between(1000, network.reorderMs);
	}
	if (draw < network.reorderShare + network.dayLateShare) {
		facts.late++;
		return DAY_MS * rng.between(0.8, 1.2);
	}
	return 0;
}
