import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { afterEach, expect, test } from 'vitest';
import { startSubscriber } from '$lib/server/ingest/subscriber';
import { Bench, LINK_SECRET, nodeKeys, until } from '../support/broker';
import { MqttNode } from '../support/mqtt-node';

const bench = new Bench();
afterEach(async () => await bench.end());

/** Exit code and what it said on standard error. */
async function failing(env: NodeJS.ProcessEnv): Promise<{ code: number | null; said: string }> {
	const child = spawn(process.execPath, ['--import', 'tsx', 'src/launch/broker.ts'], {
		env: { ...process.env, MQTT_PORT: '0', LODEKEEP_LINK_SECRET: LINK_SECRET, ...env },
		stdio: ['ignore', 'ignore', 'pipe']
	});
	let said = '';
	child.stderr.on('data', (chunk: Buffer) => (said += chunk.toString('utf8')));
	await once(child, 'close');
	return { code: child.exitCode, said };
}

test('a taken port ends the process with a sentence', async () => {
	const taken = await bench.broker();
	const { code, said } = await failing({ MQTT_PORT: String(taken.port) });
	expect(said).toMatch(/^The MQTT port is taken by another program: .*\n$/);
	expect(code).toBe(1);
});

test('on an address that is not all and not 127.0.0.1 the app still has its way in', async () => {
	const keys = nodeKeys(1);
	const broker = await bench.broker({ host: '127.0.0.2' });
	await bench.subscriber(broker.port, keys);
	const node = await MqttNode.connect(broker.port, keys[0]!, { host: '127.0.0.2' });
	bench.ending(node, async (n) => await n.end());
	await until(() => broker.stats().connectedNodes === 1);
});

test('the app with a wrong secret is never connected, keeps trying, and a broker that knows it lets it in', async () => {
	const first = await bench.broker({ linkSecret: 'quite another secret' });
	const subscriber = startSubscriber({
		kind: 'embedded',
		port: first.port,
		linkSecret: LINK_SECRET
	});
	bench.ending(subscriber, async (s) => await s.close());
	await until(() => first.stats().refusedTotal.link >= 2);
	expect(subscriber.connected).toBe(false);
	const { port } = first;
	await first.close();
	await bench.broker({ port });
	await until(() => subscriber.connected);
});

test('a second app with the secret takes the session over, with all that is held', async () => {
	const keys = nodeKeys(1);
	const broker = await bench.broker();
	const first = await bench.subscriber(broker.port, keys);
	const node = await MqttNode.connect(broker.port, keys[0]!);
	bench.ending(node, async (n) => await n.end());
	const answered = node.publish('one');
	expect(await first.take(1)).toHaveLength(1);
	let lost = false;
	first.onConnected((connected) => (lost ||= !connected));
	const second = await bench.subscriber(broker.port, keys);
	await until(() => lost);
	await first.close();
	second.settle(await second.take(1));
	await answered;
});
