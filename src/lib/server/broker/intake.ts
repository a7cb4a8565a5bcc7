import { isUtf8 } from 'node:buffer';
import { newTotals, type BrokerRefusal, type BrokerStats } from './counters';
import { PublishParts, type PacketCursor } from './frames';
import { HeldList, NodeQueue, type AnswerPort } from './held-list';
import type { Limits } from './limits';
import type { LinkOwner, NodeLink, Verdict } from './node-link';

/** Below this part of the ceiling reading goes on. */
const LOW_WATER = 0.9;

/** Takes the nodes' messages into the ordered list and answers them when the app says so. */
export class Intake implements LinkOwner {
	readonly held: HeldList;
	readonly links = new Set<NodeLink>();
	/** Signed-in nodes by serial: aedes ends an older connection before a newer one is let in. */
	readonly nodes = new Map<string, NodeLink>();
	readonly totals = newTotals();
	atCeiling = false;
	/** Something new lies in the list. */
	onArrival: () => void = () => undefined;
	/** A message of the app on one of the link's own topics; false: for aedes. */
	onAppPublish: (topic: string, payload: Buffer, answer: () => void) => boolean = () => false;
	onEnded: (link: NodeLink) => void = () => undefined;
	readonly #queues = new Map<string, NodeQueue>();
	/** Gated until something is answered. */
	readonly #waiting = new Set<NodeLink>();
	readonly #parts = new PublishParts();

	constructor(
		readonly limits: Limits,
		nowMs: number
	) {
		this.held = new HeldList(nowMs * 1_000);
	}

	publish(link: NodeLink, bytes: Buffer, packet: PacketCursor, nowMs: number): Verdict {
		const parts = this.#parts;
		const { role } = link;
		if (role === null || !parts.read(bytes, packet.flags, packet.bodyAt, packet.endAt)) {
			return 'malformed';
		}
		const topic = bytes.subarray(parts.topicAt, parts.topicEnd);
		const payload = bytes.subarray(parts.payloadAt, packet.endAt);
		if (role.kind === 'app') return this.#fromApp(link, topic, payload);
		if (parts.qos === 2) return 'qos2';
		if (!isBelow(topic, role.topicPrefix)) return 'topic';
		const queue = this.#queueOf(role.serial);
		if (this.atCeiling || this.#hasItsShare(queue)) {
			this.#waiting.add(link);
			return 'wait';
		}
		if (!role.rate.take(nowMs)) {
			this.totals.slowedTotal++;
			setTimeout(() => link.reopen(), role.rate.waitMs()).unref();
			return 'wait';
		}
		if ((packet.flags & 1) === 1) this.totals.retainIgnoredTotal++;
		if (parts.qos === 0) this.totals.qos0Total++;
		else if (queue.adopt(link, parts.messageId, topic, payload)) {
			this.totals.adoptedTotal++;
			return 'taken';
		}
		this.#hold(queue, parts.qos === 1 ? link : null, parts.messageId, topic, payload, nowMs);
		return 'taken';
	}

	/** A last will: a hint without promise, so at the ceiling it is let go. */
	gone(serial: string, topic: Buffer, payload: Buffer, nowMs: number): void {
		if (!this.atCeiling) this.#hold(this.#queueOf(serial), null, 0, topic, payload, nowMs);
	}

	/** The app's receipts: PUBACKs leave per node in order of arrival. */
	settle(runs: readonly { from: number; count: number }[]): void {
		const before = this.held.size;
		const queues = new Set<NodeQueue>();
		for (const run of runs) this.held.settle(run.from, run.count, queues);
		const ports = new Set<AnswerPort>();
		for (const queue of queues) queue.answer(ports);
		for (const port of ports) port.flush();
		this.totals.answeredTotal += before - this.held.size;
		if (this.held.bytes < LOW_WATER * this.limits.heldCeilingBytes) this.atCeiling = false;
		if (!this.atCeiling && this.#waiting.size > 0) this.#reopen();
	}

	refused(reason: BrokerRefusal): void {
		this.totals.refusedTotal[reason]++;
	}

	ended(link: NodeLink): void {
		this.links.delete(link);
		this.#waiting.delete(link);
		if (link.role?.kind === 'node') {
			const { serial } = link.role;
			this.#queues.get(serial)?.orphan(link);
			if (this.nodes.get(serial) === link) this.nodes.delete(serial);
		}
		this.onEnded(link);
	}

	stats(knownNodes: number): BrokerStats {
		let gatedConnections = 0;
		for (const link of this.links) if (link.gated) gatedConnections++;
		return {
			...this.totals,
			connectedNodes: this.nodes.size,
			knownNodes,
			gatedConnections,
			heldMessages: this.held.size,
			heldBytes: this.held.bytes,
			atCeiling: this.atCeiling
		};
	}

	#fromApp(link: NodeLink, topic: Buffer, payload: Buffer): Verdict {
		const { qos, messageId } = this.#parts;
		const answer = () => {
			if (qos !== 1) return;
			link.answer(messageId);
			link.flush();
		};
		return this.onAppPublish(topic.toString('utf8'), payload, answer) ? 'taken' : 'pass';
	}

	#hold(
		queue: NodeQueue,
		port: AnswerPort | null,
		messageId: number,
		topic: Buffer,
		payload: Buffer,
		arrivedAtMs: number
	): void {
		const costBytes = topic.length + payload.length + this.limits.heldOverheadBytes;
		this.held.add({
			receipt: 0,
			queue,
			port,
			messageId,
			topic,
			payload,
			arrivedAtMs,
			promised: port !== null,
			costBytes,
			settled: false
		});
		this.totals.takenTotal++;
		if (this.held.bytes >= this.limits.heldCeilingBytes) this.atCeiling = true;
		this.onArrival();
	}

	#queueOf(serial: string): NodeQueue {
		let queue = this.#queues.get(serial);
		if (queue === undefined) {
			queue = new NodeQueue(serial);
			this.#queues.set(serial, queue);
		}
		return queue;
	}

	#hasItsShare(queue: NodeQueue): boolean {
		return queue.bytes >= this.limits.nodeHeldBytes || queue.size >= this.limits.nodeHeldMessages;
	}

	#reopen(): void {
		for (const link of [...this.#waiting]) {
			const role = link.role;
			if (role?.kind === 'node' && this.#hasItsShare(this.#queueOf(role.serial))) continue;
			this.#waiting.delete(link);
			link.reopen();
		}
	}
}

/** Below the node's own `up/`, well formed, without wildcards (MQTT 3.1.1, 4.7.1 and 1.5.3). */
function isBelow(topic: Buffer, prefix: Buffer): boolean {
	if (topic.length <= prefix.length) return false;
	if (prefix.compare(topic, 0, prefix.length) !== 0) return false;
	let ascii = true;
	for (let i = prefix.length; i < topic.length; i++) {
		const byte = topic[i]!;
		if (byte === 0 || byte === 0x23 || byte === 0x2b) return false;
		if (byte > 0x7f) ascii = false;
	}
	return ascii || isUtf8(topic);
}
