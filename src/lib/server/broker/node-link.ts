import type { Socket } from 'node:net';
import { Duplex } from 'node:stream';
import type { BrokerRefusal } from './counters';
import { connack, isLevel4, PACKET, PacketCursor, pubacks, PINGRESP } from './frames';
import type { AnswerPort } from './held-list';
import type { Limits } from './limits';
import type { RateBucket } from './rate';

/** Who is at the other end, once signed in. */
export type Role =
	| { kind: 'node'; serial: string; hash: string; topicPrefix: Buffer; rate: RateBucket }
	| { kind: 'app' };

/** `taken`: ours; `pass`: for aedes; `wait`: not now, the gate closes before it. */
export type Verdict = 'taken' | 'pass' | 'wait' | BrokerRefusal;

/** What a connection asks of the broker. */
export interface LinkOwner {
	readonly limits: Limits;
	readonly atCeiling: boolean;
	publish(link: NodeLink, bytes: Buffer, packet: PacketCursor, nowMs: number): Verdict;
	refused(reason: BrokerRefusal): void;
	ended(link: NodeLink): void;
}

/**
 * Stands between a socket and aedes. Aedes sees sign-in, subscriptions, receipts of commands and the
 * goodbye; PUBLISH goes straight into the broker's own list, pings are answered here. So aedes neither
 * acknowledges nor routes what is not committed, and a closed gate (rate, share, ceiling) holds messages
 * back without holding back the pings behind them (aedes stops reading altogether and nodes are cut).
 */
export class NodeLink extends Duplex implements AnswerPort {
	role: Role | null = null;
	keepaliveMs = 0;
	heardAtMs = Date.now();
	gated = false;
	/** Set by sign-in: the will is checked before the node is let in. */
	will: { topic: string; qos: number } | null = null;
	#stage: 'connect' | 'signing' | 'open' = 'connect';
	#waiting: Buffer | null = null;
	/** Where in `#waiting` the search for pings goes on, and how many were answered ahead. */
	#pingAt = 0;
	#pingsAhead = 0;
	#aedesFull = false;
	#answers: number[] = [];
	readonly #packet = new PacketCursor();

	constructor(
		readonly socket: Socket,
		private readonly owner: LinkOwner
	) {
		super({ autoDestroy: true, emitClose: true });
		socket.setNoDelay(true);
		// A node without keepalive, or one that is not read on, must still be found dead one day.
		socket.setKeepAlive(true, 60_000);
		socket.on('data', (chunk: Buffer) => this.#read(chunk));
		socket.on('error', () => this.destroy());
		socket.on('close', () => this.destroy());
	}

	/** CONNACK is on its way: what came behind CONNECT is read now. */
	open(): void {
		if (this.#stage !== 'signing') return;
		this.#stage = 'open';
		this.#work(Date.now());
	}

	/** The reason for the closed gate may have passed. */
	reopen(): void {
		if (!this.gated || this.destroyed) return;
		this.gated = false;
		this.#work(Date.now());
	}

	answer(messageId: number): void {
		this.#answers.push(messageId);
	}

	flush(): void {
		if (this.#answers.length === 0) return;
		this.#send(pubacks(this.#answers));
		this.#answers = [];
	}

	refuse(reason: BrokerRefusal): void {
		this.owner.refused(reason);
		this.destroy();
	}

	override _read(): void {
		this.#aedesFull = false;
		this.#flow();
	}

	override _write(chunk: Buffer, _encoding: BufferEncoding, done: () => void): void {
		this.#send(chunk);
		done();
	}

	/** Aedes corks every packet, so all its pieces come here at once and leave as one. */
	override _writev(chunks: { chunk: Buffer }[], done: () => void): void {
		this.#send(Buffer.concat(chunks.map(({ chunk }) => chunk)));
		done();
	}

	override _final(done: () => void): void {
		this.socket.end();
		done();
	}

	override _destroy(error: Error | null, done: (error: Error | null) => void): void {
		this.#waiting = null;
		// Lets a refusal's CONNACK leave before the socket goes; who doesn't read it is cut.
		this.socket.setTimeout(5_000, () => this.socket.destroy());
		this.socket.destroySoon();
		this.owner.ended(this);
		done(error);
	}

	#send(bytes: Buffer): void {
		if (this.socket.destroyed) return;
		this.socket.write(bytes);
		if (this.socket.writableLength > this.owner.limits.unreadBytes && this.role?.kind !== 'app') {
			this.socket.destroy();
		}
	}

	#read(chunk: Buffer): void {
		if (this.destroyed) return;
		this.heardAtMs = Date.now();
		this.#waiting = this.#waiting === null ? chunk : Buffer.concat([this.#waiting, chunk]);
		if (this.gated || this.#stage === 'signing') this.#answerPings();
		else this.#work(this.heardAtMs);
		this.#flow();
	}

	/** Reads packets until one is incomplete, must wait, or ends the connection. */
	#work(nowMs: number): void {
		const bytes = this.#waiting;
		if (bytes === null || this.destroyed) return;
		// A packet counts as heard when it is read, however long it waited here.
		this.heardAtMs = nowMs;
		const packet = this.#packet;
		let at = 0;
		while (!this.gated && this.#stage !== 'signing' && at < bytes.length) {
			const found = packet.find(bytes, at, this.#maxBytes());
			if (this.#stage === 'connect' && packet.type !== PACKET.connect) {
				return this.refuse('malformed');
			}
			if (found === 'partial') break;
			if (found !== 'whole') return this.refuse(found);
			const { endAt } = packet;
			const verdict = this.#take(bytes, at, nowMs);
			if (verdict === 'wait') {
				this.gated = true;
				break;
			}
			if (verdict === 'pass') this.#pass(bytes.subarray(at, endAt));
			else if (verdict !== 'taken') return this.refuse(verdict);
			at = endAt;
			if (this.destroyed) return;
		}
		this.#waiting = at === bytes.length ? null : at === 0 ? bytes : bytes.subarray(at);
		this.#pingAt = Math.max(0, this.#pingAt - at);
		if (this.gated) this.#answerPings();
		this.#flow();
	}

	#maxBytes(): number {
		if (this.#stage === 'connect') return this.owner.limits.maxConnectBytes;
		return this.role?.kind === 'app'
			? this.owner.limits.maxAppFrameBytes
			: this.owner.limits.maxFrameBytes;
	}

	#take(bytes: Buffer, at: number, nowMs: number): Verdict {
		const packet = this.#packet;
		if (this.#stage === 'connect') {
			if (!isLevel4(bytes, packet.bodyAt, packet.endAt)) {
				this.socket.write(connack(1));
				return 'level';
			}
			this.#stage = 'signing';
			return 'pass';
		}
		if (packet.type === PACKET.publish) return this.owner.publish(this, bytes, packet, nowMs);
		if (packet.type !== PACKET.pingreq) return 'pass';
		if (at < this.#pingAt && this.#pingsAhead > 0) this.#pingsAhead--;
		else this.#send(PINGRESP);
		return 'taken';
	}

	#pass(bytes: Buffer): void {
		if (!this.push(bytes)) this.#aedesFull = true;
	}

	/** Answers the pings among what waits; the walk skips over message bodies. */
	#answerPings(): void {
		const bytes = this.#waiting;
		if (bytes === null || this.#stage !== 'open') return;
		const packet = this.#packet;
		while (this.#pingAt < bytes.length) {
			const found = packet.find(bytes, this.#pingAt, this.#maxBytes());
			if (found === 'too_large' || found === 'malformed') return this.refuse(found);
			if (packet.endAt < 0) return;
			if (packet.type === PACKET.pingreq) {
				if (found === 'partial') return;
				this.#send(PINGRESP);
				this.#pingsAhead++;
			}
			this.#pingAt = packet.endAt;
		}
	}

	/** Reads on while what waits is bounded and aedes keeps up. */
	#flow(): void {
		const { limits, atCeiling } = this.owner;
		const most = atCeiling ? limits.waitingBytesAtCeiling : limits.waitingBytes;
		const held = this.gated || this.#stage === 'signing' ? (this.#waiting?.length ?? 0) : 0;
		const stop = this.#aedesFull || held >= most;
		if (stop === this.socket.isPaused()) return;
		if (stop) this.socket.pause();
		else {
			// Silence while nobody read is not the node's.
			this.heardAtMs = Date.now();
			this.socket.resume();
		}
	}

	/** Whether one and a half keepalives (MQTT 3.1.1, 3.1.2.10) passed without a packet while it was read on. */
	isSilent(nowMs: number): boolean {
		return (
			this.#stage === 'open' &&
			this.keepaliveMs > 0 &&
			!this.gated &&
			!this.socket.isPaused() &&
			nowMs - this.heardAtMs > 1.5 * this.keepaliveMs
		);
	}
}
