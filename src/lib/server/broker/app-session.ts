import type { Client } from 'aedes';
import { z } from 'zod';
import type { NodeDirectory } from './directory';
import type { Intake } from './intake';
import { decodeReceipts, encodeBatch, LINK_TOPIC } from './link-codec';
import { linkOf } from './authenticate';
import { Networks } from './networks';
import type { NodeLink } from './node-link';

const entries = z.array(z.object({ serial: z.string(), hashes: z.array(z.string()) }));
const directoryWord = z.discriminatedUnion('op', [
	z.object({ op: z.literal('full'), part: z.enum(['first', 'middle', 'last', 'only']), entries }),
	z.object({ op: z.literal('change'), entries, removed: z.array(z.string()) }),
	z.object({ op: z.literal('vouch'), current: z.boolean() })
]);

/** Well under the packet limit: a serial has 32 characters, an address 45. */
const NETWORKS_AT_ONCE = 1_000;

/** The one session of the app: hands it what is held, hears its receipts and its directory. */
export class AppSession {
	readonly networks = new Networks();
	#client: Client | null = null;
	#scheduled = false;
	#statsTimer: NodeJS.Timeout;

	constructor(
		private readonly intake: Intake,
		private readonly directory: NodeDirectory
	) {
		intake.onArrival = () => this.#schedule();
		intake.onAppPublish = (topic, payload, answer) => this.#hear(topic, payload, answer);
		intake.onEnded = (link) => this.#ended(link);
		this.#statsTimer = setInterval(() => this.#tell(), 1_000).unref();
	}

	get present(): boolean {
		return this.#client !== null;
	}

	/** A new session gets all that is held, in order, before anything new. */
	begin(client: Client): void {
		this.#client = client;
		this.intake.held.rewind();
		this.networks.tellAll();
		this.#tell();
		this.#schedule();
	}

	close(): void {
		clearInterval(this.#statsTimer);
	}

	#ended(link: NodeLink): void {
		if (this.#client === null || linkOf(this.#client) !== link) return;
		this.#client = null;
		this.directory.doubt();
	}

	/** Everything that came in one turn of the loop goes in one hand-over. */
	#schedule(): void {
		if (this.#scheduled || this.#client === null) return;
		this.#scheduled = true;
		setImmediate(() => {
			this.#scheduled = false;
			this.#handOver();
		});
	}

	#handOver(): void {
		const { held, limits } = this.intake;
		while (this.#client !== null) {
			const room = limits.aheadMessages - held.ahead;
			if (room <= 0 || held.aheadBytes >= limits.aheadBytes) return;
			const batch = held.take(Math.min(room, limits.batchMessages), limits.batchBytes);
			if (batch.length === 0) return;
			this.#send(LINK_TOPIC.held, encodeBatch(batch));
		}
	}

	/** By the client object: aedes' emitter overflows the stack when a reader with thousands of hand-offs goes. */
	#send(topic: string, payload: Buffer): void {
		this.#client?.publish(
			{ cmd: 'publish', topic, payload, qos: 0, dup: false, retain: false },
			() => undefined
		);
	}

	#tell(): void {
		if (this.#client === null) return;
		this.#send(
			LINK_TOPIC.stats,
			Buffer.from(JSON.stringify(this.intake.stats(this.directory.size)))
		);
		const changed = this.networks.take(NETWORKS_AT_ONCE);
		if (changed.length > 0) this.#send(LINK_TOPIC.networks, Buffer.from(JSON.stringify(changed)));
	}

	#hear(topic: string, payload: Buffer, answer: () => void): boolean {
		if (topic === LINK_TOPIC.receipt) {
			this.intake.settle(decodeReceipts(payload));
			this.#schedule();
		} else if (topic === LINK_TOPIC.directory) this.#learn(payload);
		else return false;
		answer();
		return true;
	}

	#learn(payload: Buffer): void {
		const word = read(payload);
		if (word === null) return;
		if (word.op === 'vouch' && !word.current) return this.directory.doubt();
		if (word.op === 'full') this.directory.stage(word.entries, word.part);
		if (word.op === 'change') this.directory.change(word.entries, word.removed);
		// Half a list says nothing about who is missing from it.
		if (word.op === 'full' && (word.part === 'first' || word.part === 'middle')) return;
		this.directory.vouch(Date.now());
		if (word.op !== 'vouch') this.#endStrangers();
	}

	/** Withdrawn and re-keyed nodes lose their connection at once. */
	#endStrangers(): void {
		for (const link of [...this.intake.links]) {
			const { role } = link;
			if (role?.kind !== 'node' || this.directory.allows(role.serial, role.hash)) continue;
			link.refuse('withdrawn');
		}
	}
}

/** null: the word of an app of another build; what is known stays in force. */
function read(payload: Buffer): z.infer<typeof directoryWord> | null {
	try {
		return directoryWord.parse(JSON.parse(payload.toString('utf8')));
	} catch {
		return null;
	}
}
