import { afterEach, expect, test } from 'vitest';
import { Bench, drain, nodeKeys, pause, takeCount, textOf, until } from '../support/broker';
import { MqttNode } from '../support/mqtt-node';

const bench = new Bench();
afterEach(async () => await bench.end());

async function oneNode() {
	const keys = nodeKeys(1);
	const broker = await bench.broker();
	const subscriber = await bench.subscriber(broker.port, keys);
	const node = await MqttNode.connect(broker.port, keys[0]!);
	bench.ending(node, async (n) => await n.end());
	return { broker, subscriber, node };
}

test('no PUBACK leaves before the receipt', async () => {
	const { subscriber, node } = await oneNode();
	const answered = node.publish('one');
	const [message] = await takeCount(subscriber, 1);
	expect(message).toMatchObject({
		serial: 'NODE-0000',
		topic: 'lodekeep/1/NODE-0000/up/reading',
		promised: true
	});
	expect(Math.abs(Date.now() - message!.arrivedAtMs)).toBeLessThan(2_000);
	await pause(300);
	expect(node.answered).toEqual([]);
	subscriber.settle([message!]);
	await answered;
	expect(node.answered).toEqual(['one']);
});

test('PUBACKs leave in order of arrival also when receipts come in another order', async () => {
	const { subscriber, node } = await oneNode();
	const texts = Array.from({ length: 100 }, (_, i) => `m${i}`);
	const all = Promise.all(texts.map(async (text) => await node.publish(text)));
	const messages = await takeCount(subscriber, 100);
	expect(messages.map(textOf)).toEqual(texts);
	subscriber.settle(messages.slice(1).reverse());
	await pause(200);
	expect(node.answered).toEqual([]);
	subscriber.settle(messages.slice(0, 1));
	await all;
	expect(node.answered).toEqual(texts);
});

test('reset brings what was taken and not settled again, in order', async () => {
	const { subscriber, node } = await oneNode();
	const texts = Array.from({ length: 20 }, (_, i) => `m${i}`);
	const all = Promise.all(texts.map(async (text) => await node.publish(text)));
	const messages = await takeCount(subscriber, 20);
	subscriber.settle(messages.slice(0, 5));
	await subscriber.reset();
	const again = await takeCount(subscriber, 15);
	expect(again.map(textOf)).toEqual(texts.slice(5));
	subscriber.settle(again);
	await all;
});

test('a command reaches the node that subscribed', async () => {
	const { subscriber, node } = await oneNode();
	await node.listen();
	expect(await subscriber.publishDown('NODE-0000', Buffer.from('do'))).toBe(true);
	await until(() => node.commands.length === 1);
	expect(node.commands[0]!.toString()).toBe('do');
});

test('QoS 0 is taken without promise and counted; a retained message is not kept', async () => {
	const { broker, subscriber, node } = await oneNode();
	node.client.publish('lodekeep/1/NODE-0000/up/reading', 'zero', { qos: 0, retain: true });
	const [message] = await takeCount(subscriber, 1);
	expect(message).toMatchObject({ promised: false });
	subscriber.settle([message!]);
	expect(broker.stats()).toMatchObject({ qos0Total: 1, retainIgnoredTotal: 1 });
	await until(() => subscriber.stats()?.qos0Total === 1 && subscriber.stats()?.heldMessages === 0);
});

test('a last will arrives as up/gone without promise when the connection breaks', async () => {
	const keys = nodeKeys(1);
	const broker = await bench.broker();
	const subscriber = await bench.subscriber(broker.port, keys);
	const seen = drain(subscriber);
	const node = await MqttNode.connect(broker.port, keys[0]!, {
		will: {
			topic: 'lodekeep/1/NODE-0000/up/gone',
			payload: Buffer.alloc(0),
			qos: 1,
			retain: false
		},
		reconnectPeriod: 0
	});
	node.client.stream.destroy();
	await until(() => seen.length === 1);
	expect(seen[0]).toMatchObject({ topic: 'lodekeep/1/NODE-0000/up/gone', promised: false });
	expect(seen[0]!.bytes).toHaveLength(0);
});
