import { connect } from 'node:net';
import { once } from 'node:events';
import { afterEach, expect, test } from 'vitest';
import type { BrokerRefusal } from '$lib/server/broker/counters';
import type { BrokerConfig } from '$lib/server/broker/start';
import { Bench, drain, nodeKeys, pause, takeCount, textOf, until } from '../support/broker';
import { MqttNode } from '../support/mqtt-node';

const bench = new Bench();
afterEach(async () => await bench.end());

const keys = nodeKeys(3);
const UP = `lodekeep/1/${keys[0]!.serial}/up/`;

async function setUp(config: Partial<BrokerConfig> = {}, options = {}) {
	const broker = await bench.broker(config);
	const subscriber = await bench.subscriber(broker.port, keys);
	const node = await MqttNode.connect(broker.port, keys[0]!, options);
	bench.ending(node, async (n) => await n.end());
	return { broker, subscriber, node };
}

const texts = (count: number, prefix = 'm') =>
	Array.from({ length: count }, (_, i) => `${prefix}${i}`);

test.each<[string, string, BrokerRefusal, 0 | 1 | 2]>([
	["another node's topic", `lodekeep/1/${keys[1]!.serial}/up/reading`, 'topic', 1],
	['its own command topic', `lodekeep/1/${keys[0]!.serial}/down`, 'topic', 1],
	['nothing below up/', UP, 'topic', 1],
	["the app's link", 'lodekeep/link/receipt', 'topic', 0],
	['a system topic', '$SYS/broker', 'topic', 0],
	['a longer serial', `lodekeep/1/${keys[0]!.serial}0/up/reading`, 'topic', 1],
	['its own topic at QoS 2', `${UP}reading`, 'qos2', 2]
])(
	'a message to %s ends the connection, is counted and reaches nobody',
	async (_, topic, reason, qos) => {
		const { broker, node } = await setUp({}, { reconnectPeriod: 0 });
		node.client.publish(topic, 'x', { qos });
		await until(() => node.closes === 1);
		expect(broker.stats().refusedTotal[reason]).toBe(1);
		expect(broker.stats().takenTotal).toBe(0);
	}
);

test('any kind below the own up/ is taken: the pipeline judges it', async () => {
	const { subscriber, node } = await setUp();
	const seen = drain(subscriber);
	for (const kind of ['reading', 'pair', 'hello', 'ack', 'a/b/ü']) await node.publish(kind, kind);
	expect(seen.map(({ topic }) => topic)).toEqual(
		['reading', 'pair', 'hello', 'ack', 'a/b/ü'].map((kind) => `${UP}${kind}`)
	);
});

test('a subscription elsewhere gets the failure code and is counted; the own one holds', async () => {
	const { broker, subscriber, node } = await setUp();
	const wishes = ['#', 'lodekeep/1/+/down', `lodekeep/1/${keys[1]!.serial}/down`, `${UP}reading`];
	for (const topic of [...wishes, '$SYS/#', 'lodekeep/link/held']) {
		// MQTT.js says so of a SUBACK with 0x80 (MQTT 3.1.1, 3.9.3: failure).
		await expect(node.client.subscribeAsync(topic)).rejects.toThrow('Subscribe error');
	}
	expect(broker.stats().refusedTotal.subscription).toBe(6);
	await node.listen();
	await subscriber.publishDown(node.serial, Buffer.from('do'));
	await until(() => node.commands.length === 1);
	expect(node.closes).toBe(0);
});

test('over the rate a node is slowed, not cut, and loses nothing', async () => {
	const { broker, subscriber, node } = await setUp({ ratePerS: 100 }, { keepalive: 1 });
	const seen = drain(subscriber);
	const beganMs = Date.now();
	const all = texts(500);
	await Promise.all(all.map(async (text) => await node.publish(text)));
	// 100 at once, 400 more at 100 a second.
	expect(Date.now() - beganMs).toBeGreaterThan(3_500);
	expect(Date.now() - beganMs).toBeLessThan(8_000);
	expect(seen.map(textOf)).toEqual(all);
	expect(node.closes).toBe(0);
	expect(broker.stats().slowedTotal).toBeGreaterThan(0);
});

test('a slowed node slows nobody else', async () => {
	const { broker, subscriber, node } = await setUp({ ratePerS: 50 });
	drain(subscriber);
	const quiet = await MqttNode.connect(broker.port, keys[1]!);
	bench.ending(quiet, async (n) => await n.end());
	const slow = Promise.all(texts(200).map(async (text) => await node.publish(text)));
	await pause(100);
	const beganMs = Date.now();
	for (const text of texts(20)) await quiet.publish(text);
	expect(Date.now() - beganMs).toBeLessThan(1_000);
	expect(node.answered.length).toBeLessThan(200);
	await slow;
});

test('at its share of what is held a node waits, with its pings answered, and others go on', async () => {
	const limits = { nodeHeldMessages: 100 };
	const { broker, subscriber, node } = await setUp({ limits }, { keepalive: 1 });
	const other = await MqttNode.connect(broker.port, keys[1]!);
	bench.ending(other, async (n) => await n.end());
	const all = Promise.all(texts(300).map(async (text) => await node.publish(text)));
	await until(() => broker.stats().gatedConnections === 1);
	const otherAnswered = other.publish('other');
	await pause(4_000);
	expect(node.closes).toBe(0);
	expect(broker.stats().heldMessages).toBe(101);
	const seen = drain(subscriber);
	await Promise.all([all, otherAnswered]);
	expect(seen.filter(({ serial }) => serial === node.serial).map(textOf)).toEqual(texts(300));
	expect(broker.stats()).toMatchObject({ heldMessages: 0, heldBytes: 0, gatedConnections: 0 });
});

test('above the ceiling the broker reads no more messages, cuts nobody, and goes on when there is room', async () => {
	const limits = { heldCeilingBytes: 30_000 };
	const { broker, subscriber, node } = await setUp({ limits }, { keepalive: 1 });
	const second = await MqttNode.connect(broker.port, keys[1]!, { keepalive: 1 });
	bench.ending(second, async (n) => await n.end());
	const all = Promise.all([
		...texts(200).map(async (text) => await node.publish(text)),
		...texts(200).map(async (text) => await second.publish(text))
	]);
	await until(() => broker.stats().atCeiling);
	await pause(3_500);
	const { heldBytes } = broker.stats();
	expect(heldBytes).toBeGreaterThanOrEqual(30_000);
	expect(heldBytes).toBeLessThan(30_000 + 1_000);
	expect([node.closes, second.closes]).toEqual([0, 0]);
	const seen = drain(subscriber, 10);
	await all;
	for (const { serial } of [node, second]) {
		expect(seen.filter((m) => m.serial === serial).map(textOf)).toEqual(texts(200));
	}
});

test('a message over 4,096 bytes is handed on for the record, one over 64 KiB ends the connection', async () => {
	const { broker, subscriber, node } = await setUp({}, { reconnectPeriod: 0 });
	drain(subscriber);
	await node.publish('x'.repeat(60_000));
	node.client.publish(`${UP}reading`, 'x'.repeat(70_000), { qos: 1 });
	await until(() => node.closes === 1);
	expect(broker.stats().refusedTotal.too_large).toBe(1);
	expect(broker.stats().takenTotal).toBe(1);
});

test('a stranger who sends anything but a short CONNECT is cut off', async () => {
	const broker = await bench.broker();
	const cases: [Buffer, BrokerRefusal][] = [
		[Buffer.from('GET / HTTP/1.1\r\n\r\n'), 'malformed'],
		[Buffer.from([0x10, 0xff, 0xff, 0x7f]), 'too_large'],
		[Buffer.from([0x30, 0x02, 0x00, 0x00]), 'malformed']
	];
	for (const [bytes, reason] of cases) {
		const socket = connect({ host: '127.0.0.1', port: broker.port });
		socket.on('error', () => undefined);
		socket.write(bytes);
		await once(socket, 'close');
		expect(broker.stats().refusedTotal[reason]).toBeGreaterThan(0);
	}
});

test('commands for a node that is away are kept up to a bound', async () => {
	const { broker, subscriber, node } = await setUp({ limits: { offlineCommands: 3 } });
	await node.listen();
	await node.end();
	await until(() => broker.stats().connectedNodes === 0);
	for (const text of texts(5)) await subscriber.publishDown(node.serial, Buffer.from(text));
	expect(broker.stats().commandsDroppedTotal).toBe(2);
	const back = await MqttNode.connect(broker.port, keys[0]!);
	bench.ending(back, async (n) => await n.end());
	await until(() => back.commands.length === 3);
	expect(back.commands.map(String)).toEqual(texts(3));
});

test('messages behind CONNECT in the same packet wait for the sign-in and are taken', async () => {
	const broker = await bench.broker();
	const subscriber = await bench.subscriber(broker.port, keys);
	const { default: mqttPacket } = await import('mqtt-packet');
	const socket = connect({ host: '127.0.0.1', port: broker.port });
	const hello = mqttPacket.generate({
		cmd: 'connect',
		protocolId: 'MQTT',
		protocolVersion: 4,
		clean: true,
		clientId: keys[0]!.serial,
		keepalive: 60,
		username: keys[0]!.serial,
		password: Buffer.from(keys[0]!.password)
	});
	const message = (id: number) =>
		mqttPacket.generate({
			cmd: 'publish',
			topic: `${UP}reading`,
			payload: `m${id}`,
			qos: 1,
			messageId: id,
			dup: false,
			retain: false
		});
	socket.write(Buffer.concat([hello, message(1), Buffer.from([0xc0, 0x00]), message(2)]));
	const messages = await takeCount(subscriber, 2);
	expect(messages.map(textOf)).toEqual(['m1', 'm2']);
	subscriber.settle(messages);
	const got: Buffer[] = [];
	socket.on('data', (chunk: Buffer) => got.push(chunk));
	await until(() => Buffer.concat(got).length >= 14);
	// CONNACK 0, PINGRESP, PUBACK 1, PUBACK 2 (MQTT 3.1.1, 3.2, 3.13, 3.4).
	expect(Buffer.concat(got).toString('hex')).toBe('20020000d0004002000140020002');
	socket.destroy();
});
