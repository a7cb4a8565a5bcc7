import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { createInterface } from 'node:readline';
import { pathToFileURL } from 'node:url';
import mqtt from 'mqtt';
import { startSubscriber } from '$lib/server/ingest/subscriber';
import { LoadNode } from '../support/mqtt-load';
import { testKey, type TestKey } from '../support/mqtt-node';

export interface BrokerFigures {
	/** Messages of QoS 1 a second that bare aedes acknowledges and passes to one subscriber. */
	barePerS: number;
	/** The same without a subscriber: bare aedes only acknowledges. */
	bareUnreadPerS: number;
	/** The same through the held list: handed over, receipted (no database), acknowledged. */
	heldPerS: number;
	nodes: number;
	window: number;
	payloadBytes: number;
}

export interface BrokerBenchOptions {
	nodes?: number;
	/** Unanswered messages of one node. */
	window?: number;
	payloadBytes?: number;
	warmMs?: number;
	measureMs?: number;
}

const SECRET = 'the link secret of a bench run';
const BARE = `
	import { createServer } from 'node:net';
	import { Aedes } from 'aedes';
	const aedes = await Aedes.createBroker({ authenticate: (c, u, p, done) => done(null, true) });
	const server = createServer(aedes.handle);
	server.listen(0, '127.0.0.1', () => console.log(JSON.stringify({ port: server.address().port })));
`;

/** Both passages in one run on one machine: broker in its own process, nodes and subscriber in this one. */
export async function measureBrokers(options: BrokerBenchOptions = {}): Promise<BrokerFigures> {
	const {
		nodes = 100,
		window = 64,
		payloadBytes = 80,
		warmMs = 1_000,
		measureMs = 4_000
	} = options;
	const keys = Array.from({ length: nodes }, (_, i) => testKey(`BENCH-${i}`));
	const payload = Buffer.alloc(payloadBytes, 0x5a);
	const load = { keys, payload, window, warmMs, measureMs };
	const barePerS = await measureBare(load, 'read');
	const bareUnreadPerS = await measureBare(load, 'unread');
	const heldPerS = await measureHeld(load);
	return { barePerS, bareUnreadPerS, heldPerS, nodes, window, payloadBytes };
}

interface Load {
	keys: TestKey[];
	payload: Buffer;
	window: number;
	warmMs: number;
	measureMs: number;
}

async function measureBare(load: Load, reading: 'read' | 'unread'): Promise<number> {
	const child = spawn(process.execPath, ['--input-type=module', '-e', BARE], childOptions({}));
	try {
		const port = await portOf(child);
		const reader = await mqtt.connectAsync(`mqtt://127.0.0.1:${port}`, { protocolVersion: 4 });
		if (reading === 'read') await reader.subscribeAsync('lodekeep/1/+/up/#', { qos: 0 });
		const rate = await rateOf(port, load);
		await reader.endAsync(true);
		return rate;
	} finally {
		await ended(child);
	}
}

async function measureHeld(load: Load): Promise<number> {
	const child = spawn(
		process.execPath,
		['--import', 'tsx', 'src/launch/broker.ts'],
		childOptions({ MQTT_PORT: '0', MQTT_RATE: '1000000', LODEKEEP_LINK_SECRET: SECRET })
	);
	try {
		const port = await portOf(child);
		const subscriber = startSubscriber({ kind: 'embedded', port, linkSecret: SECRET });
		await new Promise<void>((resolve) => subscriber.onConnected(() => resolve()));
		await subscriber.replaceDirectory(load.keys.map((key) => key.entry));
		const settling = (async () => {
			for (;;) {
				const batch = await subscriber.take(1_000);
				if (batch.length === 0) return;
				subscriber.settle(batch);
			}
		})();
		const rate = await rateOf(port, load);
		await subscriber.close();
		await settling;
		return rate;
	} finally {
		await ended(child);
	}
}

async function rateOf(port: number, load: Load): Promise<number> {
	const nodes = await Promise.all(
		load.keys.map(async (key) => await LoadNode.connect(port, key, load.payload, load.window))
	);
	const answered = () => nodes.reduce((sum, node) => sum + node.answered, 0);
	for (const node of nodes) node.begin();
	await sleep(load.warmMs);
	const before = answered();
	const beganMs = performance.now();
	await sleep(load.measureMs);
	const perS = ((answered() - before) * 1_000) / (performance.now() - beganMs);
	for (const node of nodes) node.stop();
	return Math.round(perS);
}

const childOptions = (env: NodeJS.ProcessEnv) => ({
	env: { ...process.env, ...env },
	stdio: ['ignore', 'pipe', 'inherit'] as ['ignore', 'pipe', 'inherit']
});

async function portOf(child: ChildProcess): Promise<number> {
	const [line] = (await once(createInterface({ input: child.stdout! }), 'line')) as [string];
	return (JSON.parse(line) as { port: number }).port;
}

async function ended(child: ChildProcess): Promise<void> {
	const end = once(child, 'exit');
	child.kill('SIGTERM');
	await end;
}

const sleep = async (ms: number): Promise<void> =>
	await new Promise((resolve) => setTimeout(resolve, ms));

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
	process.stdout.write(`${JSON.stringify({ bench: 'broker', ...(await measureBrokers()) })}\n`);
}
