import { start, type BrokerConfig, type RunningBroker } from '$lib/server/broker/start';
import type { HeldMessage, Subscriber } from '$lib/server/ingest/subscriber-types';
import { startSubscriber } from '$lib/server/ingest/subscriber';
import { testKey, type TestKey } from './mqtt-node';

export const LINK_SECRET = 'a test link secret, 32 letters..';

/** What a test started; ended in reverse order. */
export class Bench {
	readonly #ends: (() => Promise<unknown>)[] = [];

	ending<T>(thing: T, end: (thing: T) => Promise<unknown>): T {
		this.#ends.push(async () => await end(thing));
		return thing;
	}

	async end(): Promise<void> {
		for (const end of this.#ends.splice(0).reverse()) await end();
	}

	async broker(config: Partial<BrokerConfig> = {}): Promise<RunningBroker> {
		const broker = await start({
			host: '127.0.0.1',
			port: 0,
			tls: null,
			ratePerS: 100_000,
			linkSecret: LINK_SECRET,
			...config
		});
		return this.ending(broker, async (b) => await b.close());
	}

	/** Connected, with these nodes in the broker's directory. */
	async subscriber(port: number, keys: readonly TestKey[]): Promise<Subscriber> {
		const subscriber = startSubscriber({ kind: 'embedded', port, linkSecret: LINK_SECRET });
		this.ending(subscriber, async (s) => await s.close());
		await until(() => subscriber.connected);
		await subscriber.replaceDirectory(keys.map((key) => key.entry));
		return subscriber;
	}
}

export const nodeKeys = (count: number, prefix = 'NODE'): TestKey[] =>
	Array.from({ length: count }, (_, i) => testKey(`${prefix}-${String(i).padStart(4, '0')}`));

/** Polls a condition; fails with its text after the limit. */
export async function until(
	condition: () => boolean,
	limitMs = 10_000,
	what = condition.toString()
): Promise<void> {
	const endMs = Date.now() + limitMs;
	while (!condition()) {
		if (Date.now() > endMs) throw new Error(`not within ${limitMs} ms: ${what}`);
		await new Promise((resolve) => setTimeout(resolve, 5));
	}
}

export const pause = async (ms: number): Promise<void> =>
	await new Promise((resolve) => setTimeout(resolve, ms));

export const textOf = (message: HeldMessage): string => Buffer.from(message.bytes).toString('utf8');

/** Takes until `count` messages have come, without settling. */
export async function takeCount(subscriber: Subscriber, count: number): Promise<HeldMessage[]> {
	const taken: HeldMessage[] = [];
	while (taken.length < count) {
		const batch = await subscriber.take(count - taken.length);
		if (batch.length === 0) break;
		taken.push(...batch);
	}
	return taken;
}

/** Takes and settles all the time, keeping what came; ends with the subscriber. */
export function drain(subscriber: Subscriber, max = 1_000): HeldMessage[] {
	const seen: HeldMessage[] = [];
	void (async () => {
		for (;;) {
			const batch = await subscriber.take(max);
			if (batch.length === 0) return;
			seen.push(...batch);
			subscriber.settle(batch);
		}
	})();
	return seen;
}
