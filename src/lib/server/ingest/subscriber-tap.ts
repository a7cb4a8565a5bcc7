import type { Socket } from 'node:net';
import { Duplex } from 'node:stream';
import { PACKET, PacketCursor, pubacks, PublishParts } from '$lib/server/broker/frames';

export interface TappedMessage {
	topic: string;
	payload: Buffer;
	qos: number;
	messageId: number;
}

/** Far above any node's message; a broker that sends more is not ours to read. */
const MAX_PACKET_BYTES = 1024 * 1024;

/** A socket whose incoming PUBLISH packets (QoS 0 and 1) go to `onMessages`, everything else to the reader. */
export class PublishTap extends Duplex {
	readonly #socket: Socket;
	#rest: Buffer | null = null;
	#readerFull = false;
	#holding = false;
	readonly #packet = new PacketCursor();
	readonly #parts = new PublishParts();

	constructor(
		socket: Socket,
		private readonly onMessages: (messages: TappedMessage[]) => void
	) {
		super({ autoDestroy: true });
		this.#socket = socket;
		socket.setNoDelay(true);
		socket.on('data', (chunk: Buffer) => this.#split(chunk));
		socket.on('error', (error) => this.destroy(error));
		socket.on('close', () => this.destroy());
	}

	answer(messageIds: readonly number[]): void {
		if (messageIds.length > 0 && !this.#socket.destroyed) this.#socket.write(pubacks(messageIds));
	}

	/** Stops or goes on reading. */
	hold(holding: boolean): void {
		this.#holding = holding;
		this.#flow();
	}

	override _read(): void {
		this.#readerFull = false;
		this.#flow();
	}

	override _write(chunk: Buffer, _encoding: BufferEncoding, done: () => void): void {
		this.#socket.write(chunk);
		done();
	}

	override _writev(chunks: { chunk: Buffer }[], done: () => void): void {
		this.#socket.write(Buffer.concat(chunks.map(({ chunk }) => chunk)));
		done();
	}

	override _final(done: () => void): void {
		this.#socket.end();
		done();
	}

	override _destroy(error: Error | null, done: (error: Error | null) => void): void {
		this.#socket.destroy();
		done(error);
	}

	#flow(): void {
		const stop = this.#holding || this.#readerFull;
		if (stop === this.#socket.isPaused()) return;
		if (stop) this.#socket.pause();
		else this.#socket.resume();
	}

	#split(chunk: Buffer): void {
		const bytes = this.#rest === null ? chunk : Buffer.concat([this.#rest, chunk]);
		const messages: TappedMessage[] = [];
		let at = 0;
		while (at < bytes.length) {
			const found = this.#packet.find(bytes, at, MAX_PACKET_BYTES);
			if (found === 'partial') break;
			if (found !== 'whole') {
				this.destroy(new Error(`MQTT packet ${found}`));
				return;
			}
			const { endAt } = this.#packet;
			const message = this.#message(bytes, endAt);
			if (message !== null) messages.push(message);
			else if (!this.push(bytes.subarray(at, endAt))) this.#readerFull = true;
			at = endAt;
		}
		this.#rest = at === bytes.length ? null : bytes.subarray(at);
		if (messages.length > 0) this.onMessages(messages);
		this.#flow();
	}

	#message(bytes: Buffer, endAt: number): TappedMessage | null {
		const { type, flags, bodyAt } = this.#packet;
		const parts = this.#parts;
		if (type !== PACKET.publish || !parts.read(bytes, flags, bodyAt, endAt)) return null;
		if (parts.qos === 2) return null;
		return {
			topic: bytes.toString('utf8', parts.topicAt, parts.topicEnd),
			payload: bytes.subarray(parts.payloadAt, endAt),
			qos: parts.qos,
			messageId: parts.messageId
		};
	}
}
