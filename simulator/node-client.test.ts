import { createServer, type AddressInfo } from 'node:net';
import { Aedes } from 'aedes';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { mqttPassword, openUp, sealCommand } from '$lib/wire/frames';
import { downTopic } from '$lib/wire/topics';
import type { CommandFrame, UpFrame } from '$lib/wire/types';
import { connectNode } from './node-client';

const SERIAL = 'TEST-0007';
const KEY = Uint8Array.from({ length: 32 }, (_, i) => i);
const RANGE = { unsignedAllowed: false, rangeCounts: { min: -131_072, max: 131_071 } };

let broker: Aedes;
const server = createServer();
let port = 0;
const seen: { user: string; password: string; id: string } = { user: '', password: '', id: '' };
const heard: { topic: string; bytes: Uint8Array; qos: number }[] = [];

beforeAll(async () => {
	broker = await Aedes.createBroker({
		authenticate: (client, user, password, done) => {
			Object.assign(seen, { id: client.id, user: String(user), password: String(password) });
			done(null, true);
		}
	});
	broker.on('publish', ({ topic, payload, qos }, client) => {
		if (client !== null) heard.push({ topic, bytes: new Uint8Array(payload as Buffer), qos });
	});
	server.on('connection', (socket) => broker.handle(socket));
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
	port = (server.address() as AddressInfo).port;
});

afterAll(async () => {
	await new Promise<void>((resolve) => broker.close(resolve));
	server.close();
});

const reading: UpFrame = {
	kind: 'reading',
	boot: 7,
	seq: 42,
	t: 1_700_000_000_000,
	sentMs: 1_700_000_000_500,
	unsigned: false,
	rows: [{ dtMs: 0, counts: [1234, -2345, 3456], tempDc: null }],
	polarity: 1,
	tempDc: 215,
	batteryMv: 3600,
	rssiDbm: null,
	pulse: null,
	tx: null
};

test('a node signs in by its serial and the password of its key, and its frames open with that key alone', async () => {
	const client = await connectNode({ host: '127.0.0.1', port }, SERIAL, KEY);
	expect(seen).toEqual({ id: SERIAL, user: SERIAL, password: mqttPassword(KEY) });
	await client.send(reading);
	expect(client.waiting).toBe(0);
	const message = heard.find(({ topic }) => topic.endsWith('/up/reading'))!;
	expect(message.qos).toBe(1);
	expect(openUp(message.topic, message.bytes, [KEY], RANGE)).toEqual({ ok: true, frame: reading });
	const other = openUp(message.topic, message.bytes, [new Uint8Array(32)], RANGE);
	expect(other).toMatchObject({ ok: false, reason: 'bad_tag' });
	await client.close();
});

test('a command that is badly signed never reaches the node', async () => {
	const client = await connectNode({ host: '127.0.0.1', port }, SERIAL, KEY);
	const taken: CommandFrame[] = [];
	await client.listen((command) => taken.push(command));
	const command = (id: number): CommandFrame => ({
		id: Uint8Array.from([0, 0, 0, 0, 0, 0, 0, id]),
		verb: 'set',
		boot: 7,
		t: 1_700_000_000_000,
		expiresMs: 1_700_000_060_000,
		report: null
	});
	const topic = downTopic(SERIAL);
	const publish = async (payload: Uint8Array) =>
		await new Promise<void>((resolve, reject) =>
			broker.publish(
				{ cmd: 'publish', topic, payload: Buffer.from(payload), qos: 1, retain: false, dup: false },
				(error) => (error ? reject(error) : resolve())
			)
		);
	await publish(sealCommand(topic, command(1), new Uint8Array(32)));
	await publish(sealCommand(topic, command(2), KEY));
	await expect.poll(() => taken.length).toBe(1);
	expect(taken[0]!.id[7]).toBe(2);
	await client.close();
});
