import { afterEach, beforeEach, expect, test } from 'vitest';
import type { BrokerRefusal } from '$lib/server/broker/counters';
import type { RunningBroker } from '$lib/server/broker/start';
import type { Subscriber } from '$lib/server/ingest/subscriber-types';
import { Bench, LINK_SECRET, nodeKeys, pause, until } from '../support/broker';
import { connackCode, MqttNode, testKey } from '../support/mqtt-node';

// Return codes: OASIS MQTT 3.1.1, table 3.1. What is refused: protocol.md, 'Transport'.
const bench = new Bench();
const keys = nodeKeys(2);
const [own, other] = [keys[0]!, keys[1]!];
let broker: RunningBroker;
let subscriber: Subscriber;

beforeEach(async () => {
	broker = await bench.broker();
	subscriber = await bench.subscriber(broker.port, keys);
});
afterEach(async () => await bench.end());

const code = async (options: Parameters<typeof connackCode>[1]) =>
	await connackCode(broker.port, {
		clientId: own.serial,
		username: own.serial,
		password: own.password,
		...options
	});
const counted = (reason: BrokerRefusal) => broker.stats().refusedTotal[reason];

test('a node signs in by serial and password', async () => {
	expect(await code({})).toBe(0);
});

test('MQTT level 5 and level 3 get return code 1', async () => {
	expect(await code({ protocolVersion: 5 })).toBe(1);
	expect(await code({ protocolId: 'MQIsdp', protocolVersion: 3 })).toBe(1);
	expect(counted('level')).toBe(2);
});

test('a wrong password and an unknown serial get return code 5, also one without a password', async () => {
	expect(await code({ password: other.password })).toBe(5);
	const stranger = testKey('STRANGER-1');
	expect(
		await code({
			clientId: stranger.serial,
			username: stranger.serial,
			password: stranger.password
		})
	).toBe(5);
	expect(await connackCode(broker.port, { clientId: own.serial, username: own.serial })).toBe(5);
	expect(counted('credentials')).toBe(3);
});

test('client id and user name must be one serial', async () => {
	expect(await code({ clientId: other.serial })).toBe(5);
	expect(await code({ username: other.serial, password: other.password })).toBe(5);
	for (const clientId of ['node-0000', 'AB', 'A'.repeat(33), 'NODE_0000', '__proto__', '']) {
		expect(await code({ clientId, username: clientId, clean: true })).toBe(2);
	}
	expect(counted('identifier')).toBe(8);
});

test('nobody takes a session over without its password', async () => {
	const node = await MqttNode.connect(broker.port, own);
	bench.ending(node, async (n) => await n.end());
	expect(await code({ password: other.password })).toBe(5);
	expect(await code({ username: other.serial, password: other.password })).toBe(5);
	await pause(200);
	expect(node.closes).toBe(0);
	expect(await code({})).toBe(0);
	await until(() => node.closes === 1);
});

test("the app's link is taken only by its secret", async () => {
	const link = { clientId: 'lodekeep-app', username: 'lodekeep-app' };
	expect(await code({ ...link, password: `${LINK_SECRET}.` })).toBe(5);
	expect(await code({ ...link, password: '' })).toBe(5);
	expect(
		await code({ clientId: own.serial, username: 'lodekeep-app', password: LINK_SECRET })
	).toBe(5);
	expect(counted('link')).toBe(3);
	expect(subscriber.connected).toBe(true);
});

test('a last will elsewhere than on the own up/gone, or of QoS 2, is refused', async () => {
	const gone = `lodekeep/1/${own.serial}/up/gone`;
	const will = (topic: string, qos: 0 | 1 | 2) => ({
		will: { topic, payload: Buffer.alloc(0), qos, retain: false }
	});
	expect(await code(will(`lodekeep/1/${other.serial}/up/gone`, 1))).toBe(5);
	expect(await code(will(`lodekeep/1/${own.serial}/up/reading`, 1))).toBe(5);
	expect(await code(will(gone, 2))).toBe(5);
	expect(counted('will')).toBe(3);
	expect(await code(will(gone, 1))).toBe(0);
});

test('while the app is away known nodes are let in and all others get return code 3, never 5', async () => {
	await subscriber.close();
	await until(() => broker.stats().connectedNodes === 0);
	await pause(100);
	expect(await code({})).toBe(0);
	expect(await code({ password: 'wrong' })).toBe(3);
	const stranger = testKey('STRANGER-1');
	const asStranger = { clientId: stranger.serial, username: stranger.serial };
	expect(await code(asStranger)).toBe(3);
	expect(counted('unavailable')).toBe(2);
	expect(counted('credentials')).toBe(0);
});

test('while the app cannot ask its database the same holds, until it can again', async () => {
	expect(await subscriber.vouchDirectory(false)).toBe(true);
	const asStranger = { clientId: 'STRANGER-1', username: 'STRANGER-1' };
	expect(await code({})).toBe(0);
	expect(await code(asStranger)).toBe(3);
	expect(await subscriber.updateDirectory([], [])).toBe(true);
	expect(await code(asStranger)).toBe(5);
});

test('re-keying and withdrawing end the connection at once; an overlap does not', async () => {
	const node = await MqttNode.connect(broker.port, own, { reconnectPeriod: 0 });
	const second = await MqttNode.connect(broker.port, other, { reconnectPeriod: 0 });
	for (const each of [node, second]) bench.ending(each, async (n) => await n.end());
	const renewed = testKey(own.serial);
	const both = [...renewed.entry.hashes, ...own.entry.hashes];
	await subscriber.updateDirectory([{ serial: own.serial, hashes: both }], []);
	await pause(200);
	expect(node.closes).toBe(0);
	await subscriber.updateDirectory([renewed.entry], []);
	await until(() => node.closes === 1, 1_000);
	expect(second.closes).toBe(0);
	expect(await code({})).toBe(5);
	expect(await code({ password: renewed.password })).toBe(0);
	await subscriber.updateDirectory([], [other.serial]);
	await until(() => second.closes === 1, 1_000);
	expect(counted('withdrawn')).toBe(2);
});

test('a full list ends the connections of those who are no longer in it', async () => {
	const node = await MqttNode.connect(broker.port, own, { reconnectPeriod: 0 });
	bench.ending(node, async (n) => await n.end());
	await subscriber.replaceDirectory([other.entry]);
	await until(() => node.closes === 1, 1_000);
	expect(await code({})).toBe(5);
});

test('a directory of many parts is whole at the other end', async () => {
	const many = nodeKeys(3_500, 'MANY');
	expect(await subscriber.replaceDirectory(many.map(({ entry }) => entry))).toBe(true);
	expect(broker.stats().knownNodes).toBe(3_500);
	const last = many.at(-1)!;
	expect(
		await code({ clientId: last.serial, username: last.serial, password: last.password })
	).toBe(0);
});
