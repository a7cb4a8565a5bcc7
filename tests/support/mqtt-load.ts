import { once } from 'node:events';
import { connect, type Socket } from 'node:net';
import mqttPacket from 'mqtt-packet';
import type { TestKey } from './mqtt-node';

/** A node as raw packets, so that the load generator costs little beside what it measures. */
export class LoadNode {
	answered = 0;
	sent = 0;
	#socket: Socket;
	#nextId = 1;
	readonly #packet: Buffer;
	readonly #idAt: number;

	private constructor(
		socket: Socket,
		topic: string,
		payload: Buffer,
		private readonly window: number
	) {
		this.#socket = socket;
		this.#packet = mqttPacket.generate({
			cmd: 'publish',
			topic,
			payload,
			qos: 1,
			messageId: 1,
			dup: false,
			retain: false
		});
		this.#idAt = this.#packet.length - payload.length - 2;
		let rest = 0;
		socket.on('data', (chunk: Buffer) => {
			rest += chunk.length;
			const count = rest >>> 2;
			rest &= 3;
			this.answered += count;
			this.#send(count);
		});
	}

	/** Connects and signs in; publishing begins with `begin`. */
	static async connect(
		port: number,
		key: Pick<TestKey, 'serial' | 'password'>,
		payload: Buffer,
		window: number
	): Promise<LoadNode> {
		const socket = connect({ host: '127.0.0.1', port, noDelay: true });
		socket.on('error', () => undefined);
		await once(socket, 'connect');
		socket.write(
			mqttPacket.generate({
				cmd: 'connect',
				protocolId: 'MQTT',
				protocolVersion: 4,
				clean: true,
				clientId: key.serial,
				keepalive: 60,
				username: key.serial,
				password: Buffer.from(key.password)
			})
		);
		const [connack] = (await once(socket, 'data')) as [Buffer];
		if (connack[3] !== 0) throw new Error(`refused with return code ${connack[3]}`);
		return new LoadNode(socket, `lodekeep/1/${key.serial}/up/reading`, payload, window);
	}

	begin(): void {
		this.#send(this.window);
	}

	stop(): void {
		this.#socket.destroy();
	}

	#send(count: number): void {
		const length = this.#packet.length;
		const out = Buffer.allocUnsafe(length * count);
		for (let i = 0; i < count; i++) {
			this.#packet.copy(out, i * length);
			out.writeUInt16BE(this.#nextId, i * length + this.#idAt);
			this.#nextId = this.#nextId === 65_535 ? 1 : this.#nextId + 1;
		}
		this.sent += count;
		this.#socket.write(out);
	}
}
