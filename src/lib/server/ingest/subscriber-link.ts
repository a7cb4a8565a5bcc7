import type { MqttClient } from 'mqtt';

const FIRST_WAIT_MS = 100;
const LONGEST_WAIT_MS = 5_000;
const LASTING_MS = 5_000;

/** Connection state with its listeners, and MQTT.js' own reconnecting made to back off. */
export class LinkState {
	connected = false;
	/** What waits for an answer and hears of the loss of the connection instead. */
	readonly waiting = new Set<() => void>();
	readonly #listeners: ((connected: boolean) => void)[] = [];

	onConnected(listener: (connected: boolean) => void): void {
		this.#listeners.push(listener);
	}

	set(connected: boolean): void {
		if (connected === this.connected) return;
		this.connected = connected;
		for (const listener of this.#listeners) listener(connected);
	}

	/**
	 * MQTT.js reads the period anew before each try. Only a connection that lasts brings the short wait
	 * back, so that being let in and thrown out again at once is no tight loop.
	 */
	backOff(client: MqttClient): void {
		const short = () => (client.options.reconnectPeriod = FIRST_WAIT_MS);
		let lasting: NodeJS.Timeout | undefined;
		short();
		client.on('connect', () => (lasting = setTimeout(short, LASTING_MS).unref()));
		client.on('close', () => {
			clearTimeout(lasting);
			for (const lost of [...this.waiting]) lost();
		});
		client.on('reconnect', () => {
			const waitedMs = client.options.reconnectPeriod ?? FIRST_WAIT_MS;
			client.options.reconnectPeriod = Math.min(waitedMs * 2, LONGEST_WAIT_MS);
		});
	}
}

/** Publishes and tells whether the other end took it; false when not connected or lost on the way. */
export async function publishTaken(
	client: MqttClient,
	state: LinkState,
	topic: string,
	payload: Buffer
): Promise<boolean> {
	if (!state.connected) return false;
	return await new Promise<boolean>((resolve) => {
		const end = (taken: boolean) => {
			state.waiting.delete(lost);
			resolve(taken);
		};
		const lost = () => end(false);
		state.waiting.add(lost);
		client.publish(topic, payload, { qos: 1 }, (error) => end(!error));
	});
}
