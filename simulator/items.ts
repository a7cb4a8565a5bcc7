import type { Counts3, UpFrame } from '$lib/wire/types';
import type { Generated } from './generate';
import { frameOf, rowTempC, type MessageLog } from './message-log';

/** One row, in counts. */
export interface GeneratedRow {
	kind: 'row';
	nodeIndex: number;
	atMs: number;
	boot: number;
	seq: number;
	row: number;
	counts: Counts3;
	polarity: 1 | -1;
	tempC: number | null;
}

/** A pair, hello or ack. */
export interface GeneratedPulse {
	kind: 'pulse';
	nodeIndex: number;
	atMs: number;
	frame: Exclude<UpFrame, { kind: 'reading' }>;
	/** The film's magnetization after the pulse. */
	polarityAfter: 1 | -1;
}

export type GeneratedItem = GeneratedRow | GeneratedPulse;

/** When the server takes each message of a node to have begun, ms; NaN = it moves nothing (tests/accuracy). */
export type MessageTimes = (nodeIndex: number) => (message: number) => number;

const trueTimes =
	(generated: Generated): MessageTimes =>
	(nodeIndex) =>
	(message) =>
		generated.logs[nodeIndex]!.firstAtMs.values[message]!;

function* messageItems(
	log: MessageLog,
	nodeIndex: number,
	message: number,
	firstAtMs: number
): Generator<GeneratedItem> {
	const boot = log.boot.values[message]!;
	const seq = log.seq.values[message]!;
	const polarity = log.polarity.values[message] === -1 ? -1 : 1;
	const other = log.others.get(message);
	if (other !== undefined && other.kind !== 'reading') {
		const pulse = { kind: 'pulse', nodeIndex, atMs: firstAtMs, frame: other } as const;
		yield { ...pulse, polarityAfter: polarity };
		return;
	}
	const from = log.rowFrom.values[message]!;
	const [dtMs, counts] = [log.dtMs.values, log.counts.values];
	for (let row = 0; row < log.rowCount.values[message]!; row++) {
		const at = from + row;
		yield {
			kind: 'row',
			nodeIndex,
			atMs: firstAtMs + dtMs[at]!,
			boot,
			seq,
			row,
			counts: [counts[at * 3]!, counts[at * 3 + 1]!, counts[at * 3 + 2]!],
			polarity,
			tempC: rowTempC(log, message, at)
		};
	}
}

/** What was heard of one node, each message once, in the node's own order (boot, seq, row). */
function* nodeItems(
	generated: Generated,
	nodeIndex: number,
	times: MessageTimes
): Generator<GeneratedItem> {
	const log = generated.logs[nodeIndex]!;
	const timeOf = times(nodeIndex);
	let last = -1;
	for (const message of generated.deliveries[nodeIndex]!.message) {
		if (message === last) continue;
		last = message;
		const firstAtMs = timeOf(message);
		if (Number.isNaN(firstAtMs)) continue;
		yield* messageItems(log, nodeIndex, message, firstAtMs);
	}
}

/**
 * Everything heard of some nodes merged by event time, duplicates dropped: an undisturbed run. Within
 * a node the order is (boot, seq, row), also where its times say otherwise.
 */
export function* inEventOrder(
	generated: Generated,
	nodes: readonly number[] = generated.plan.nodes.map((_, i) => i),
	times: MessageTimes = trueTimes(generated)
): Generator<GeneratedItem> {
	const heads = nodes
		.map((nodeIndex) => {
			const items = nodeItems(generated, nodeIndex, times);
			return { items, head: items.next() };
		})
		.filter(({ head }) => head.done !== true);
	while (heads.length > 0) {
		let first = 0;
		for (let i = 1; i < heads.length; i++) {
			if (
				(heads[i]!.head.value as GeneratedItem).atMs <
				(heads[first]!.head.value as GeneratedItem).atMs
			)
				first = i;
		}
		const next = heads[first]!;
		yield next.head.value as GeneratedItem;
		next.head = next.items.next();
		if (next.head.done === true) heads.splice(first, 1);
	}
}

export interface ArrivedMessage {
	nodeIndex: number;
	message: number;
	arrivedAtMs: number;
}

/** Every message as it arrived, duplicates and all. */
export function inArrivalOrder(generated: Generated): ArrivedMessage[] {
	const all = generated.deliveries.flatMap(({ message, arrivedAtMs }, nodeIndex) =>
		message.map((m, i) => ({ nodeIndex, message: m, arrivedAtMs: arrivedAtMs[i]! }))
	);
	return all.sort((a, b) => a.arrivedAtMs - b.arrivedAtMs);
}

export const frameOfArrived = (generated: Generated, arrived: ArrivedMessage): UpFrame =>
	frameOf(generated.logs[arrived.nodeIndex]!, arrived.message);
