import type { HeldMessage } from './subscriber-types';

/**
 * What one session has brought and the pipeline has not settled, in order. `take` hands out,
 * `again` begins anew from the oldest unsettled. Bounded by whoever sends: the broker stays at most
 * 4,000 messages ahead of its receipts.
 */
export class SubscriberQueue {
	#unsettled = new Map<number, HeldMessage>();
	#untaken: HeldMessage[] = [];
	#at = 0;
	#waiter: (() => void) | null = null;
	#closed = false;

	get size(): number {
		return this.#unsettled.size;
	}

	add(messages: readonly HeldMessage[]): void {
		for (const message of messages) {
			this.#unsettled.set(message.receipt, message);
			this.#untaken.push(message);
		}
		this.#wake();
	}

	/** Waits for at least one message; [] when closed. One caller at a time. */
	async take(max: number): Promise<HeldMessage[]> {
		for (;;) {
			if (this.#closed) return [];
			const taken: HeldMessage[] = [];
			while (this.#at < this.#untaken.length && taken.length < max) {
				const message = this.#untaken[this.#at++]!;
				// Settled by an earlier session's batch while it came again.
				if (this.#unsettled.has(message.receipt)) taken.push(message);
			}
			if (this.#at === this.#untaken.length || this.#at > 4_096) {
				this.#untaken.splice(0, this.#at);
				this.#at = 0;
			}
			if (taken.length > 0) return taken;
			await new Promise<void>((resolve) => (this.#waiter = resolve));
		}
	}

	/** Those of the messages that were still unsettled. */
	settle(messages: readonly HeldMessage[]): HeldMessage[] {
		return messages.filter((message) => this.#unsettled.delete(message.receipt));
	}

	again(): void {
		this.#untaken = [...this.#unsettled.values()];
		this.#at = 0;
		this.#wake();
	}

	clear(): void {
		this.#unsettled.clear();
		this.#untaken = [];
		this.#at = 0;
	}

	close(): void {
		this.#closed = true;
		this.clear();
		this.#wake();
	}

	#wake(): void {
		const waiter = this.#waiter;
		this.#waiter = null;
		waiter?.();
	}
}
