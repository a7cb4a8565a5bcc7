import { once } from 'node:events';
import { connect, type Socket } from 'node:net';
import mqttPacket from 'mqtt-packet';
import { noisy, QUIET, reading, sealed, TAKEN, type TestNode } from '../support/ingest';

/** A vehicle comes or goes every this many rows: 40 s of a 4 Hz burst. */
const ROWS_A_STATE = 160;
const STEP_MS = 250;

/** Signed messages of one row each, as whole PUBLISH packets, made before the clock runs. */
export function signedPackets(
	node: TestNode,
	firstSeq: number,
	startMs: number,
	count: number,
	rowsAState = ROWS_A_STATE
) {
	const topic = `lodekeep/1/${node.serial}/up/reading`;
	return Array.from({ length: count }, (_, i) => {
		const counts = noisy(Math.floor(i / rowsAState) % 2 === 0 ? QUIET : TAKEN, i);
		const frame = reading({ seq: firstSeq + i, t: startMs + i * STEP_MS, rows: [[0, counts]] });
		return mqttPacket.generate({
			cmd: 'publish',
			topic,
			payload: Buffer.from(sealed(node, frame)),
			qos: 1,
			messageId: (i % 65_535) + 1,
			dup: false,
			retain: false
		});
	});
}

/** Sends prepared packets, at most `window` unanswered; counts PUBACKs. */
export class SignedNode {
	answered = 0;
	#next = 0;
	#rest = 0;
	/** When each packet was written, for latency; by index. */
	readonly sentMs: number[] = [];
	onAnswer: ((index: number) => void) | null = null;

	private constructor(
		readonly node: TestNode,
		private readonly socket: Socket,
		private readonly packets: readonly Buffer[]
	) {
		socket.on('data', (chunk: Buffer) => this.#heard(chunk));
	}

	static async connect(port: number, node: TestNode, packets: readonly Buffer[]) {
		const socket = connect({ host: '127.0.0.1', port, noDelay: true });
		socket.on('error', () => undefined);
		await once(socket, 'connect');
		socket.write(
			mqttPacket.generate({
				cmd: 'connect',
				protocolId: 'MQTT',
				protocolVersion: 4,
				clean: true,
				clientId: node.serial,
				keepalive: 60,
				username: node.serial,
				password: Buffer.from(node.key.password)
			})
		);
		const [connack] = (await once(socket, 'data')) as [Buffer];
		if (connack[3] !== 0) throw new Error(`refused with return code ${connack[3]}`);
		return new SignedNode(node, socket, packets);
	}

	get done(): boolean {
		return this.answered === this.packets.length;
	}

	get sent(): number {
		return this.#next;
	}

	/** Writes the next `count` packets. */
	send(count: number): void {
		const end = Math.min(this.packets.length, this.#next + count);
		if (end === this.#next) return;
		const nowMs = performance.now();
		for (let i = this.#next; i < end; i += 1) this.sentMs[i] = nowMs;
		this.socket.write(Buffer.concat(this.packets.slice(this.#next, end)));
		this.#next = end;
	}

	/** Keeps `window` unanswered until told to stop. */
	flow(window: number): void {
		this.onAnswer = () => this.send(1);
		this.send(window);
	}

	stop(): void {
		this.onAnswer = null;
	}

	end(): void {
		this.socket.destroy();
	}

	/** PUBACKs are 4 bytes each, in order (MQTT 3.1.1, 3.4 and 4.6). */
	#heard(chunk: Buffer): void {
		this.#rest += chunk.length;
		const count = this.#rest >>> 2;
		this.#rest &= 3;
		const first = this.answered;
		this.answered += count;
		if (this.onAnswer === null) return;
		if (this.onAnswer.length === 0) {
			this.send(count);
			return;
		}
		for (let i = 0; i < count; i += 1) this.onAnswer(first + i);
	}
}
