import type { Client } from 'aedes';
import { linkOf } from './authenticate';
import type { Intake } from './intake';

const COMMAND_TOPIC = /^lodekeep\/1\/([A-Z0-9-]{4,32})\/down$/;
/** Nobody may subscribe to it: what is sent here is routed to nobody. */
const NOWHERE = 'lodekeep/nowhere';

type Message = { topic: string; payload: string | Buffer; qos: number; retain: boolean };
type Wish = { topic: string };
type Answer<T> = (error: Error | null, value?: T | null) => void;

/** What still passes aedes: the app's commands, subscriptions of nodes, last wills. */
export class Commands {
	/** Commands that aedes keeps for nodes that are away. */
	readonly #kept = new Map<string, number>();

	constructor(private readonly intake: Intake) {}

	publish(client: Client | null, packet: Message, done: (error?: Error | null) => void): void {
		const role = client === null ? null : linkOf(client).role;
		if (role?.kind === 'node') {
			// Only a last will comes this way; it goes into the list and nowhere else.
			const { topic, payload } = packet;
			this.intake.gone(role.serial, Buffer.from(topic), Buffer.from(payload), Date.now());
			done(new Error('held'));
			return;
		}
		const serial = COMMAND_TOPIC.exec(packet.topic)?.[1];
		if (role?.kind !== 'app' || serial === undefined) {
			this.intake.refused('topic');
			done(new Error('topic'));
			return;
		}
		packet.retain = false;
		if (!this.#mayKeep(serial)) {
			this.intake.totals.commandsDroppedTotal++;
			packet.topic = NOWHERE;
		}
		done();
	}

	/** A node may hear its own commands; everything else gets the failure code 0x80 (section 3.9.3). */
	subscribe<T extends Wish>(client: Client, wish: T, done: Answer<T>): void {
		const { role } = linkOf(client);
		if (role?.kind === 'node' && wish.topic === `lodekeep/1/${role.serial}/down`) {
			done(null, wish);
			return;
		}
		this.intake.refused('subscription');
		done(null, null);
	}

	isBack(serial: string): void {
		this.#kept.delete(serial);
	}

	#mayKeep(serial: string): boolean {
		if (this.intake.nodes.has(serial)) return true;
		const kept = this.#kept.get(serial) ?? 0;
		if (kept >= this.intake.limits.offlineCommands) return false;
		this.#kept.set(serial, kept + 1);
		return true;
	}
}
