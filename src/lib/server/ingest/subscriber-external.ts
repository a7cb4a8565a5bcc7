import { connect as connectTcp, isIP, type Socket } from 'node:net';
import { connect as connectTls } from 'node:tls';
import { MqttClient } from 'mqtt';
import { publishTaken, LinkState } from './subscriber-link';
import { PublishTap } from './subscriber-tap';
import { SubscriberQueue } from './subscriber-queue';
import type { HeldMessage, Subscriber } from './subscriber-types';

export interface ExternalConfig {
	kind: 'external';
	/** `mqtt://` or `mqtts://`, user and password in it; `?client=` names the session (default lodekeep-app). */
	url: string;
}

const UP_TOPICS = 'lodekeep/1/+/up/#';
/** Unsettled messages above which reading stops: a broker without a window of its own must not fill the heap. */
const MOST_UNSETTLED = 20_000;

/**
 * The subscriber on any MQTT broker. MQTT.js signs in, subscribes, pings, reconnects and publishes; the
 * messages are taken out of its stream before it sees them, because it acknowledges one at a time in
 * its own order (measured), and here PUBACKs leave after the commit, a batch at once, in order.
 */
export function startExternal(config: ExternalConfig): Subscriber {
	const url = new URL(config.url);
	if (url.protocol !== 'mqtt:' && url.protocol !== 'mqtts:') {
		throw new Error('MQTT_URL: only mqtt:// and mqtts:// are possible');
	}
	const queue = new SubscriberQueue();
	const state = new LinkState();
	/** Message ids of the present session by receipt, in order of arrival; the value says whether settled. */
	let owed = new Map<number, { messageId: number; settled: boolean }>();
	let tap: PublishTap | null = null;
	let receipt = 0;

	const client = new MqttClient(
		() => {
			owed = new Map();
			queue.clear();
			tap = new PublishTap(openSocket(url), (messages) => {
				queue.add(
					messages.map((message) => {
						const held = toHeld(++receipt, message.topic, message.payload, message.qos);
						if (message.qos === 1) {
							owed.set(held.receipt, { messageId: message.messageId, settled: false });
						}
						return held;
					})
				);
				tap?.hold(queue.size > MOST_UNSETTLED);
			});
			return tap;
		},
		{
			protocolVersion: 4,
			clientId: url.searchParams.get('client') ?? 'lodekeep-app',
			username: decodeURIComponent(url.username),
			password: decodeURIComponent(url.password),
			// The session outlives the connection: what is not acknowledged comes again.
			clean: false,
			keepalive: 30,
			queueQoSZero: false,
			reconnectOnConnackError: true,
			resubscribe: false
		}
	);
	state.backOff(client);
	client.on('connect', () => {
		client.subscribe(UP_TOPICS, { qos: 1 }, (error, granted) => {
			const refused = (granted ?? []).some(({ qos }) => Number(qos) > 2);
			if (error !== null || refused) client.stream.destroy();
			else state.set(true);
		});
	});
	client.on('close', () => state.set(false));
	client.on('error', () => undefined);

	/** PUBACKs leave in order of arrival ([MQTT-4.6.0-2]): a gap waits for its receipt. */
	function answerSettled(): void {
		const ids: number[] = [];
		for (const [key, { messageId, settled }] of owed) {
			if (!settled) break;
			ids.push(messageId);
			owed.delete(key);
		}
		tap?.answer(ids);
	}

	return {
		take: async (max) => await queue.take(max),
		settle(messages) {
			for (const message of queue.settle(messages)) {
				const debt = owed.get(message.receipt);
				if (debt !== undefined) debt.settled = true;
			}
			answerSettled();
			tap?.hold(queue.size > MOST_UNSETTLED);
		},
		publishDown: async (serial, bytes) =>
			await publishTaken(client, state, `lodekeep/1/${serial}/down`, Buffer.from(bytes)),
		replaceDirectory: async () => true,
		updateDirectory: async () => true,
		vouchDirectory: async () => true,
		stats: () => null,
		takeNetworks: () => new Map(),
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

function openSocket(url: URL): Socket {
	const secure = url.protocol === 'mqtts:';
	const host = url.hostname.replace(/^\[|\]$/g, '');
	const port = Number(url.port === '' ? (secure ? 8883 : 1883) : url.port);
	if (!secure) return connectTcp({ host, port });
	// RFC 6066, section 3: no address as a server name.
	return connectTls({ host, port, ...(isIP(host) === 0 ? { servername: host } : {}) });
}

const toHeld = (receipt: number, topic: string, payload: Buffer, qos: number): HeldMessage => ({
	receipt,
	serial: topic.split('/', 3)[2] ?? '',
	topic,
	bytes: payload,
	arrivedAtMs: Date.now(),
	promised: qos === 1
});
