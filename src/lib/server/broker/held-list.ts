/** Where an answer goes: the connection a message came by. */
export interface AnswerPort {
	/** Puts a PUBACK on the way; several are written as one piece on `flush`. */
	answer(messageId: number): void;
	flush(): void;
}

const NOTHING = Buffer.alloc(0);
/** Enough for a node that repeats in order; bounds what a node that doesn't costs at each message. */
const ADOPT_SEARCH = 256;

/** One message that was taken and is not committed yet. */
export interface Held {
	receipt: number;
	readonly queue: NodeQueue;
	/** null once the connection it came by is gone: then nobody waits for its PUBACK. */
	port: AnswerPort | null;
	messageId: number;
	topic: Buffer;
	payload: Buffer;
	readonly arrivedAtMs: number;
	readonly promised: boolean;
	readonly costBytes: number;
	settled: boolean;
}

/** The unanswered messages of one node in order of arrival: PUBACKs leave in this order. */
export class NodeQueue {
	readonly items: Held[] = [];
	head = 0;
	bytes = 0;
	orphans = 0;
	#adoptAt = 0;

	constructor(readonly serial: string) {}

	get size(): number {
		return this.items.length - this.head;
	}

	/** The connection is gone; what it left waits on without an addressee. */
	orphan(port: AnswerPort): void {
		for (let i = this.head; i < this.items.length; i++) {
			const held = this.items[i]!;
			if (held.port !== port) continue;
			held.port = null;
			if (held.promised) this.orphans++;
		}
		this.#adoptAt = this.head;
	}

	/**
	 * A node sends again after a reconnect, with the same bytes (protocol, 'Transport'). What is still
	 * held from before is not held twice: it only gets its new addressee. Nodes repeat in order, so the
	 * search starts behind the last one found.
	 */
	adopt(port: AnswerPort, messageId: number, topic: Buffer, payload: Buffer): boolean {
		if (this.orphans === 0) return false;
		const span = Math.min(this.size, ADOPT_SEARCH);
		const start = Math.max(0, this.#adoptAt - this.head);
		for (let step = 0; step < span; step++) {
			const i = this.head + ((start + step) % this.size);
			const held = this.items[i]!;
			if (held.port !== null || !held.promised || held.settled) continue;
			if (!held.payload.equals(payload) || !held.topic.equals(topic)) continue;
			held.port = port;
			held.messageId = messageId;
			this.orphans--;
			this.#adoptAt = i + 1;
			return true;
		}
		return false;
	}

	/** Answers what is settled at the head; returns the ports that have something to flush. */
	answer(ports: Set<AnswerPort>): void {
		for (; this.head < this.items.length; this.head++) {
			const held = this.items[this.head]!;
			if (!held.settled) break;
			this.bytes -= held.costBytes;
			if (!held.promised) continue;
			if (held.port === null) this.orphans--;
			else {
				held.port.answer(held.messageId);
				ports.add(held.port);
			}
		}
		if (this.head < 1_024 && this.head < this.items.length) return;
		this.#adoptAt = Math.max(0, this.#adoptAt - this.head);
		this.items.splice(0, this.head);
		this.head = 0;
	}
}

/**
 * The broker's own ordered list of messages. Receipts are consecutive numbers from a base that rises
 * from start to start (ms × 1,000), so that a receipt of an earlier broker never fits a message of this one.
 */
export class HeldList {
	#items: Held[] = [];
	#head = 0;
	#next = 0;
	#firstReceipt: number;
	#size = 0;
	#ahead = 0;
	#aheadBytes = 0;
	bytes = 0;

	constructor(firstReceipt: number) {
		this.#firstReceipt = firstReceipt;
	}

	get size(): number {
		return this.#size;
	}

	/** Handed over and not settled. */
	get ahead(): number {
		return this.#ahead;
	}

	get aheadBytes(): number {
		return this.#aheadBytes;
	}

	get untaken(): number {
		return this.#items.length - this.#next;
	}

	add(held: Held): void {
		held.receipt = this.#firstReceipt + this.#items.length;
		this.#items.push(held);
		held.queue.items.push(held);
		held.queue.bytes += held.costBytes;
		this.bytes += held.costBytes;
		this.#size++;
	}

	/** The next messages in order, at least one when there is one. */
	take(maxMessages: number, maxBytes: number): Held[] {
		const taken: Held[] = [];
		let bytes = 0;
		while (this.#next < this.#items.length && taken.length < maxMessages && bytes < maxBytes) {
			const held = this.#items[this.#next++]!;
			if (held.settled) continue;
			taken.push(held);
			bytes += held.costBytes;
		}
		this.#ahead += taken.length;
		this.#aheadBytes += bytes;
		return taken;
	}

	/** A new session gets everything from the oldest on. */
	rewind(): void {
		this.#next = this.#head;
		this.#ahead = 0;
		this.#aheadBytes = 0;
	}

	/** Marks a run of receipts; unknown and repeated ones are passed over. Adds the queues concerned. */
	settle(from: number, count: number, queues: Set<NodeQueue>): void {
		const start = Math.max(from - this.#firstReceipt, this.#head);
		const end = Math.min(from - this.#firstReceipt + count, this.#items.length);
		for (let i = start; i < end; i++) {
			const held = this.#items[i]!;
			if (held.settled) continue;
			held.settled = true;
			// The entry may stay for its place in a queue; its bytes need not.
			held.topic = NOTHING;
			held.payload = NOTHING;
			this.#size--;
			this.bytes -= held.costBytes;
			if (i < this.#next) {
				this.#ahead--;
				this.#aheadBytes -= held.costBytes;
			}
			queues.add(held.queue);
		}
		this.#trim();
	}

	#trim(): void {
		while (this.#head < this.#items.length && this.#items[this.#head]!.settled) this.#head++;
		if (this.#head < 8_192 && this.#head < this.#items.length) return;
		this.#items.splice(0, this.#head);
		this.#firstReceipt += this.#head;
		this.#next = Math.max(0, this.#next - this.#head);
		this.#head = 0;
	}
}
