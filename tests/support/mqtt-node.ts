import { createHash, createHmac, randomBytes } from 'node:crypto';
import mqtt, { type IClientOptions, type MqttClient } from 'mqtt';
import type { NodeDirectoryEntry } from '$lib/server/ingest/subscriber-types';

/** A key as protocol.md, 'Transport', makes it into a password. */
export interface TestKey {
	serial: string;
	key: Buffer;
	password: string;
	entry: NodeDirectoryEntry;
}

export function testKey(serial: string, key = randomBytes(32)): TestKey {
	const password = createHmac('sha256', key).update('lodekeep mqtt 1').digest('hex');
	const hash = createHash('sha256').update(password).digest('hex');
	return { serial, key, password, entry: { serial, hashes: [hash] } };
}

/** A node's MQTT client as MQTT.js makes it; what it publishes is kept until its PUBACK, as the protocol asks. */
export class MqttNode {
	/** Payloads (as text) in the order their PUBACKs came. */
	readonly answered: string[] = [];
	/** Commands heard. */
	readonly commands: Buffer[] = [];
	closes = 0;

	private constructor(
		readonly client: MqttClient,
		readonly serial: string
	) {
		client.on('close', () => this.closes++);
		client.on('error', () => undefined);
		client.on('message', (_topic, payload) => this.commands.push(payload));
	}

	static async connect(
		port: number,
		key: Pick<TestKey, 'serial' | 'password'>,
		options: IClientOptions = {}
	): Promise<MqttNode> {
		const client = mqtt.connect({
			protocol: 'mqtt',
			host: '127.0.0.1',
			port,
			clientId: key.serial,
			username: key.serial,
			password: key.password,
			clean: false,
			keepalive: 5,
			reconnectPeriod: 200,
			// Without it MQTT.js never tries again after 'server unavailable' (return code 3).
			reconnectOnConnackError: true,
			...options
		});
		const node = new MqttNode(client, key.serial);
		await new Promise<void>((resolve, reject) => {
			client.once('connect', () => resolve());
			if (client.options.reconnectPeriod === 0) client.once('error', reject);
		});
		return node;
	}

	/** Resolves with the PUBACK. */
	async publish(text: string, kind = 'reading'): Promise<void> {
		await this.client.publishAsync(`lodekeep/1/${this.serial}/up/${kind}`, text, { qos: 1 });
		this.answered.push(text);
	}

	async listen(): Promise<void> {
		await this.client.subscribeAsync(`lodekeep/1/${this.serial}/down`, { qos: 1 });
	}

	async end(): Promise<void> {
		await this.client.endAsync(true);
	}
}

/** The return code of a refused sign-in (CONNACK), 0 when it was let in. */
export async function connackCode(port: number, options: IClientOptions): Promise<number> {
	const client = mqtt.connect({
		protocol: 'mqtt',
		host: '127.0.0.1',
		port,
		reconnectPeriod: 0,
		...options
	});
	return await new Promise<number>((resolve) => {
		client.once('connect', () => finish(0));
		client.once('error', (error) => finish('code' in error ? Number(error.code) : -1));
		client.once('close', () => finish(-1));
		function finish(code: number): void {
			client.end(true);
			resolve(code);
		}
	});
}
