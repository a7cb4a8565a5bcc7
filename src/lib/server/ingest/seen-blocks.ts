import type { Block } from '$lib/server/store/queries/received';

/** Blocks kept in memory for one node: the one it sends in and those of a repeated backlog. */
const PER_NODE = 16;

export interface MessageId {
	nodeId: number;
	boot: number;
	seq: number;
}

const blockOf = (seq: number): number => Math.floor(seq / 64);
const keyOf = (boot: number, block: number): string => `${boot}:${block}`;

/** Which messages are stored (`received`), as far as it is in memory; the database fills the rest. */
export class SeenBlocks {
	readonly #byNode = new Map<number, Map<string, Block>>();

	/** Blocks that must be read before `isStored` can tell. */
	missing(ids: Iterable<MessageId>): { nodeId: number; boot: number; block: number }[] {
		const missing = new Map<string, { nodeId: number; boot: number; block: number }>();
		for (const { nodeId, boot, seq } of ids) {
			const block = blockOf(seq);
			if (this.#byNode.get(nodeId)?.has(keyOf(boot, block)) === true) continue;
			missing.set(`${nodeId}:${boot}:${block}`, { nodeId, boot, block });
		}
		return [...missing.values()];
	}

	/** Takes what was asked for: those found, and for the others that nothing is stored. */
	learn(
		asked: readonly { nodeId: number; boot: number; block: number }[],
		found: readonly Block[]
	): void {
		for (const key of asked) this.#set({ ...key, low: 0, high: 0 });
		for (const block of found) this.#set({ ...block });
	}

	isStored({ nodeId, boot, seq }: MessageId): boolean {
		const block = this.#byNode.get(nodeId)?.get(keyOf(boot, blockOf(seq)));
		if (block === undefined) return false;
		const bit = seq % 64;
		return (((bit < 32 ? block.low : block.high) >>> (bit % 32)) & 1) === 1;
	}

	/** Notes a message and returns its block as it is to be stored. */
	note({ nodeId, boot, seq }: MessageId): Block {
		const key = keyOf(boot, blockOf(seq));
		const block = this.#byNode.get(nodeId)?.get(key) ?? {
			nodeId,
			boot,
			block: blockOf(seq),
			low: 0,
			high: 0
		};
		const bit = seq % 64;
		if (bit < 32) block.low |= 1 << bit;
		else block.high |= 1 << (bit - 32);
		this.#set(block);
		return block;
	}

	forget(nodeId: number): void {
		this.#byNode.delete(nodeId);
	}

	/** Between batches only: within one, what was read must stay until it was asked for. */
	trim(nodeIds: Iterable<number>): void {
		for (const nodeId of nodeIds) {
			const blocks = this.#byNode.get(nodeId);
			if (blocks === undefined) continue;
			for (const oldest of blocks.keys()) {
				if (blocks.size <= PER_NODE) break;
				blocks.delete(oldest);
			}
		}
	}

	#set(block: Block): void {
		let blocks = this.#byNode.get(block.nodeId);
		if (blocks === undefined) this.#byNode.set(block.nodeId, (blocks = new Map<string, Block>()));
		const key = keyOf(block.boot, block.block);
		// Moved to the end: the first is the one longest unused.
		blocks.delete(key);
		blocks.set(key, block);
	}
}
