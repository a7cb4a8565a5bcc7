import mqtt, { type MqttClient } from 'mqtt';
import { mqttPassword, openCommand, sealUp } from '$lib/wire/frames';
import { downTopic, upTopic } from '$lib/wire/topics';
import type { CommandFrame, UpFrame } from '$lib/wire/types';

export interface Broker {
	host: string;
	port: number;
}

/** One node's MQTT session: MQTT 3.1.1, QoS 1, frames signed with its key, commands only when their sign holds. */
export interface NodeClient {
	readonly serial: string;
	/** Resolves with the PUBACK: committed, or rejected and kept (protocol, 'Transport'). */
	send(frame: UpFrame): Promise<void>;
	/** How many messages wait for their PUBACK. */
	readonly waiting: number;
	listen(onCommand: (command: CommandFrame) => void): Promise<void>;
	close(): Promise<void>;
}

const RECONNECT_MS = 1500;
const KEEPALIVE_S = 60;
const CLOSE_MS = 1500;

function within(ms: number, work: Promise<unknown>): Promise<unknown> {
	return Promise.race([work, new Promise((resolve) => setTimeout(resolve, ms).unref())]);
}

export async function connectNode(
	broker: Broker,
	serial: string,
	key: Uint8Array
): Promise<NodeClient> {
	const client: MqttClient = await mqtt.connectAsync({
		...broker,
		protocol: 'mqtt',
		protocolVersion: 4,
		clientId: serial,
		username: serial,
		password: mqttPassword(key),
		clean: true,
		keepalive: KEEPALIVE_S,
		reconnectPeriod: RECONNECT_MS,
		will: { topic: upTopic(serial, 'gone'), payload: Buffer.alloc(0), qos: 1, retain: false }
	});
	// A broken connection comes again by itself; what was not acknowledged is then sent again as it was.
	client.on('error', () => undefined);
	let waiting = 0;
	return {
		serial,
		get waiting() {
			return waiting;
		},
		send: async (frame) => {
			const topic = upTopic(serial, frame.kind);
			waiting++;
			try {
				await client.publishAsync(topic, Buffer.from(sealUp(topic, frame, key)), { qos: 1 });
			} finally {
				waiting--;
			}
		},
		listen: async (onCommand) => {
			client.on('message', (topic, bytes) => {
				const opened = openCommand(topic, bytes, key);
				if (opened.ok) onCommand(opened.frame);
			});
			await client.subscribeAsync(downTopic(serial), { qos: 1 });
		},
		close: async () => {
			await within(CLOSE_MS, client.endAsync());
			client.end(true);
		}
	};
}
