import mqtt from 'mqtt';
import {
	decodeBatch,
	encodeReceipts,
	LINK_TOPIC,
	LINK_USER,
	type CarriedMessage
} from '$lib/server/broker/link-codec';
import type { BrokerStats } from '$lib/server/broker/counters';
import { publishTaken, LinkState } from './subscriber-link';
import { SubscriberQueue } from './subscriber-queue';
import type { HeldMessage, NodeDirectoryEntry, Subscriber } from './subscriber-types';

export interface EmbeddedConfig {
	kind: 'embedded';
	/** Loopback: the broker takes the app's link from nowhere else. */
	host?: string;
	port: number;
	linkSecret: string;
}

/** Keeps a part of the full list well under the broker's packet limit. */
const ENTRIES_A_PART = 1_000;

/** The app's side of the embedded broker's own link. */
export function startEmbedded(config: EmbeddedConfig): Subscriber {
	const queue = new SubscriberQueue();
	const state = new LinkState();
	let stats: BrokerStats | null = null;
	let networks = new Map<string, string>();
	/** The whole directory once it was given, so that a broker started anew gets it at once. */
	let directory: Map<string, NodeDirectoryEntry> | null = null;
	let vouched = true;
	const client = mqtt.connect({
		protocol: 'mqtt',
		host: config.host ?? '127.0.0.1',
		port: config.port,
		clientId: LINK_USER,
		username: LINK_USER,
		password: config.linkSecret,
		clean: true,
		keepalive: 30,
		queueQoSZero: false,
		reconnectOnConnackError: true,
		resubscribe: false
	});
	state.backOff(client);

	const say = async (word: object): Promise<boolean> =>
		await publishTaken(client, state, LINK_TOPIC.directory, Buffer.from(JSON.stringify(word)));

	async function sayAll(): Promise<boolean> {
		if (directory === null) return false;
		const entries = [...directory.values()];
		const parts = Math.max(1, Math.ceil(entries.length / ENTRIES_A_PART));
		const said = Array.from({ length: parts }, async (_, i) => {
			const part = parts === 1 ? 'only' : i === 0 ? 'first' : i === parts - 1 ? 'last' : 'middle';
			const slice = entries.slice(i * ENTRIES_A_PART, (i + 1) * ENTRIES_A_PART);
			return await say({ op: 'full', part, entries: slice });
		});
		if (!vouched) said.push(say({ op: 'vouch', current: false }));
		return (await Promise.all(said)).every(Boolean);
	}

	client.on('connect', () => {
		state.set(true);
		void sayAll();
	});
	client.on('close', () => {
		// What was here comes again from the broker, in order. (Not on 'connect': messages may come before it.)
		queue.clear();
		stats = null;
		state.set(false);
	});
	// MQTT.js reports every failed try here; it tries again by itself.
	client.on('error', () => undefined);
	client.on('message', (topic, payload) => {
		if (topic === LINK_TOPIC.stats) stats = JSON.parse(payload.toString('utf8')) as BrokerStats;
		if (topic === LINK_TOPIC.networks)
			for (const [serial, network] of JSON.parse(payload.toString('utf8')) as [string, string][])
				networks.set(serial, network);
		if (topic !== LINK_TOPIC.held) return;
		const batch = decodeBatch(payload);
		// Another build's broker: everything stays held there until both are of one build.
		if (batch !== null) queue.add(batch.map(toHeld));
	});

	return {
		take: async (max) => await queue.take(max),
		settle(messages) {
			// Receipts are unique over broker starts, so those of an earlier session are good too.
			queue.settle(messages);
			if (!state.connected || messages.length === 0) return;
			client.publish(LINK_TOPIC.receipt, encodeReceipts(messages.map((m) => m.receipt)));
		},
		publishDown: async (serial, bytes) =>
			await publishTaken(client, state, `lodekeep/1/${serial}/down`, Buffer.from(bytes)),
		async replaceDirectory(entries) {
			directory = new Map(entries.map((entry) => [entry.serial, entry]));
			vouched = true;
			return await sayAll();
		},
		async updateDirectory(entries, removed) {
			for (const serial of removed) directory?.delete(serial);
			for (const entry of entries) directory?.set(entry.serial, entry);
			vouched = true;
			return await say({ op: 'change', entries, removed });
		},
		async vouchDirectory(current) {
			vouched = current;
			return await say({ op: 'vouch', current });
		},
		stats: () => stats,
		takeNetworks() {
			const told = networks;
			networks = new Map();
			return told;
		},
		get connected() {
			return state.connected;
		},
		onConnected: (listener) => state.onConnected(listener),
		async reset() {
			queue.again();
		},
		async close() {
			queue.close();
			await client.endAsync(true);
			state.set(false);
		}
	};
}

const toHeld = (message: CarriedMessage): HeldMessage => ({
	receipt: message.receipt,
	serial: message.topic.split('/', 3)[2] ?? '',
	topic: message.topic,
	bytes: message.bytes,
	arrivedAtMs: message.arrivedAtMs,
	promised: message.promised
});
