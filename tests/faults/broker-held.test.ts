import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { Bench, drain, LINK_SECRET, nodeKeys, pause, textOf, until } from '../support/broker';
import { MqttNode, type TestKey } from '../support/mqtt-node';
import { run, type Running } from '../support/processes';

// Real processes: the broker as the launcher starts it, the app as a process that can be killed or stopped.
const bench = new Bench();
const LONG = process.env['LODEKEEP_LONG'] === '1';
let dir: string;

beforeEach(() => {
	dir = mkdtempSync(join(tmpdir(), 'lodekeep-held-'));
});
afterEach(async () => {
	await bench.end();
	rmSync(dir, { recursive: true });
});

async function broker(port = 0): Promise<Running<{ port: number }>> {
	const env = {
		MQTT_PORT: String(port),
		MQTT_RATE: '100000',
		LODEKEEP_LINK_SECRET: LINK_SECRET
	};
	const running = await run<{ port: number }>('src/launch/broker.ts', env);
	return bench.ending(running, async (r) => await r.kill('SIGKILL'));
}

async function taker(port: number, keys: readonly TestKey[], settles: boolean) {
	const env = {
		TAKER_PORT: String(port),
		TAKER_DIRECTORY: JSON.stringify(keys.map(({ entry }) => entry)),
		TAKER_FILE: join(dir, 'taken'),
		TAKER_SETTLES: settles ? '1' : '0',
		LODEKEEP_LINK_SECRET: LINK_SECRET
	};
	const running = await run<object>('tests/support/taker.ts', env);
	return bench.ending(running, async (r) => await r.kill('SIGKILL'));
}

const takenLines = (): string[] =>
	existsSync(join(dir, 'taken'))
		? readFileSync(join(dir, 'taken'), 'utf8').split('\n').slice(0, -1)
		: [];

async function nodesOf(port: number, keys: readonly TestKey[]): Promise<MqttNode[]> {
	const nodes = await Promise.all(keys.map(async (key) => await MqttNode.connect(port, key)));
	return nodes.map((node) => bench.ending(node, async (n) => await n.end()));
}

const texts = (count: number) => Array.from({ length: count }, (_, i) => `m${i}`);

test('an app killed with 20,000 messages held loses none: all come again in order, and only then are answered', async () => {
	const keys = nodeKeys(20);
	const { ready } = await broker();
	const killed = await taker(ready.port, keys, false);
	const nodes = await nodesOf(ready.port, keys);
	const sent = Promise.all(
		nodes.flatMap((node) => texts(1_000).map(async (text) => await node.publish(text)))
	);
	await until(() => takenLines().length >= 4_000, 30_000);
	await pause(1_000);
	// No further ahead of its receipts than that.
	expect(takenLines()).toHaveLength(4_000);
	for (let kill = 0; kill < 3; kill++) {
		await killed.kill('SIGKILL');
		const next = await taker(ready.port, keys, false);
		await until(() => takenLines().length >= 4_000 * (kill + 2), 30_000);
		await next.kill('SIGKILL');
	}
	expect(nodes.flatMap((node) => node.answered)).toEqual([]);
	const subscriber = await bench.subscriber(ready.port, keys);
	const seen = drain(subscriber);
	await sent;
	expect(seen).toHaveLength(20_000);
	for (const node of nodes) {
		expect(seen.filter(({ serial }) => serial === node.serial).map(textOf)).toEqual(texts(1_000));
		expect(node.answered).toEqual(texts(1_000));
		expect(node.closes).toBe(0);
	}
});

test(`an app stopped for ${LONG ? 90 : 12} s cuts no node with a keepalive of 5 s, and nothing is lost`, async () => {
	const keys = nodeKeys(30);
	const { ready } = await broker();
	const app = await taker(ready.port, keys, true);
	const nodes = await nodesOf(ready.port, keys);
	// Half report, half are quiet and only ping.
	const reporting = nodes.slice(0, 15);
	app.child.kill('SIGSTOP');
	const sent: Promise<void>[] = [];
	const seconds = LONG ? 90 : 12;
	for (let second = 0; second < seconds; second++) {
		for (const node of reporting) {
			for (let i = 0; i < 4; i++) sent.push(node.publish(`m${second * 4 + i}`));
		}
		await pause(1_000);
	}
	expect(nodes.map((node) => node.closes)).toEqual(nodes.map(() => 0));
	expect(nodes.flatMap((node) => node.answered)).toEqual([]);
	app.child.kill('SIGCONT');
	await Promise.all(sent);
	const lines = [...new Set(takenLines())];
	for (const { serial, closes, answered } of reporting) {
		const own = lines.filter((line) => line.startsWith(serial)).map((line) => line.split(' ')[1]);
		expect(own).toEqual(texts(seconds * 4));
		expect(answered).toEqual(texts(seconds * 4));
		expect(closes).toBe(0);
	}
}, 240_000);

test('a broker killed in the middle loses nothing: nodes send again, the app tells its directory again', async () => {
	const keys = nodeKeys(5);
	const first = await broker();
	const { port } = first.ready;
	const subscriber = await bench.subscriber(port, keys);
	const nodes = await nodesOf(port, keys);
	const seen = drain(subscriber, 50);
	const sent: Promise<void>[] = [];
	const publishing = (async () => {
		for (const text of texts(400)) {
			for (const node of nodes) sent.push(node.publish(text));
			await pause(5);
		}
	})();
	await pause(600);
	await first.kill('SIGKILL');
	await broker(port);
	await publishing;
	await Promise.all(sent);
	for (const { serial } of nodes) {
		const own = [...new Set(seen.filter((m) => m.serial === serial).map(textOf))];
		expect(own).toEqual(texts(400));
	}
	// The broker tells its figures once a second; those of before the directory came say 0.
	await until(() => subscriber.stats()?.knownNodes === 5);
});

test('nodes that reconnect again and again during an outage of the app are not held twice', async () => {
	const keys = nodeKeys(3);
	const local = await bench.broker();
	const subscriber = await bench.subscriber(local.port, keys);
	const nodes = await nodesOf(local.port, keys);
	const sent = nodes.flatMap((node) => texts(200).map(async (text) => await node.publish(text)));
	await until(() => local.stats().heldMessages === 600);
	for (let round = 1; round <= 4; round++) {
		for (const node of nodes) node.client.stream.destroy();
		// MQTT.js sends the next one again only when the one before is answered.
		await until(() => local.stats().adoptedTotal === 3 * round);
	}
	expect(local.stats().heldMessages).toBe(600);
	const seen = drain(subscriber);
	await Promise.all(sent);
	for (const node of nodes) {
		const own = [...new Set(seen.filter((m) => m.serial === node.serial).map(textOf))];
		expect(own).toEqual(texts(200));
		expect(node.answered).toEqual(texts(200));
	}
});

test('SIGTERM lets receipts under way become answers and then ends the broker', async () => {
	const keys = nodeKeys(1);
	const running = await broker();
	const subscriber = await bench.subscriber(running.ready.port, keys);
	const [node] = await nodesOf(running.ready.port, keys);
	const sent = Promise.all(texts(50).map(async (text) => await node!.publish(text)));
	const messages = await subscriber.take(50);
	const ended = running.kill('SIGTERM');
	await pause(300);
	subscriber.settle(messages);
	await sent;
	await ended;
	expect(node!.answered).toEqual(texts(50));
	expect(running.child.exitCode).toBe(0);
});
