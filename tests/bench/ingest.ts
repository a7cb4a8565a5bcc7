import { pathToFileURL } from 'node:url';
import { select } from '../support/ingest';
import { measureBrokers } from './bare-broker';
import { startBenchSite } from './bench-site';
import { SignedNode, signedPackets } from './signed-load';

export interface IngestFigures {
	/** Messages a second that bare aedes acknowledges and passes to one subscriber. */
	barePerS: number;
	/** Signed readings of one row each, committed, detected and acknowledged a second. */
	committedPerS: number;
	ratio: number;
	nodes: number;
	messages: number;
	events: number;
}

const NODES = Number(process.env['BENCH_NODES'] ?? 100);
const WINDOW = 64;
const WARM_MS = 2_000;
const MEASURE_MS = 6_000;
/** More than can be committed in the time. */
const MESSAGES_EACH = Number(process.env['BENCH_EACH'] ?? 3_600);

const sleep = async (ms: number): Promise<void> =>
	await new Promise((resolve) => setTimeout(resolve, ms));

export async function measureIngest(): Promise<IngestFigures> {
	const { barePerS } = await measureBrokers({ nodes: NODES, window: WINDOW, payloadBytes: 90 });
	const bench = await startBenchSite(NODES, 10);
	try {
		const nodes = await Promise.all(
			bench.site.nodes.map(
				async (node) =>
					await SignedNode.connect(
						bench.port,
						node,
						signedPackets(node, 1, bench.fromMs, MESSAGES_EACH)
					)
			)
		);
		const answered = () => nodes.reduce((sum, node) => sum + node.answered, 0);
		for (const node of nodes) node.flow(WINDOW);
		await sleep(WARM_MS);
		if (process.env['BENCH_APP'] !== undefined) bench.app.child.kill('SIGUSR1');
		const before = answered();
		const beganMs = performance.now();
		while (performance.now() - beganMs < MEASURE_MS && !nodes.some((node) => node.done))
			await sleep(20);
		const committedPerS = ((answered() - before) * 1_000) / (performance.now() - beganMs);
		for (const node of nodes) node.stop();
		const messages = answered();
		const [events] = await select<{ n: number }>(
			bench.store.pool,
			"SELECT COUNT(*) AS n FROM event WHERE type IN ('arrival', 'departure')"
		);
		const [stored] = await select<{ n: number }>(
			bench.store.pool,
			'SELECT COUNT(*) AS n FROM reading WHERE seq > 0'
		);
		if ((stored?.n ?? 0) < messages) throw new Error('More was acknowledged than is stored.');
		for (const node of nodes) node.end();
		return {
			barePerS,
			committedPerS: Math.round(committedPerS),
			ratio: Math.round((committedPerS / barePerS) * 100) / 100,
			nodes: NODES,
			messages,
			events: events?.n ?? 0
		};
	} finally {
		await bench.close();
	}
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href)
	process.stdout.write(`${JSON.stringify({ bench: 'ingest', ...(await measureIngest()) })}\n`);
