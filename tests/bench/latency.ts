import { pathToFileURL } from 'node:url';
import { select } from '../support/ingest';
import { startBenchSite } from './bench-site';
import { SignedNode, signedPackets } from './signed-load';

export interface LatencyFigures {
	perS: number;
	nodes: number;
	/** Publish to PUBACK: committed. */
	acknowledgedMs: { p50: number; p99: number };
	/** Publish of the row that decides a change to the event being readable in the database. */
	visibleMs: { p50: number; p99: number; changes: number };
}

const PER_S = 2_000;
const NODES = 100;
const MEASURE_MS = 10_000;
const WARM_MS = 2_000;
const TICK_MS = 5;
/** Each bay changes every 3 s of the run, which are 15 s of event time. */
const ROWS_A_STATE = 60;

const sleep = async (ms: number): Promise<void> =>
	await new Promise((resolve) => setTimeout(resolve, ms));

const quantile = (sorted: readonly number[], q: number): number =>
	Math.round((sorted[Math.min(sorted.length - 1, Math.floor(q * sorted.length))] ?? NaN) * 10) / 10;

/** Nodes burst at 20 rows a second each and change state every 60 rows. */
export async function measureLatency(): Promise<LatencyFigures> {
	const bench = await startBenchSite(NODES, 10);
	try {
		const each = Math.ceil(((WARM_MS + MEASURE_MS) / 1_000) * (PER_S / NODES)) + 40;
		const nodes = await Promise.all(
			bench.site.nodes.map(
				async (node) =>
					await SignedNode.connect(
						bench.port,
						node,
						signedPackets(node, 1, bench.fromMs, each, ROWS_A_STATE)
					)
			)
		);
		const latencies: number[] = [];
		let measuring = false;
		for (const node of nodes)
			node.onAnswer = (index) => {
				if (measuring) latencies.push(performance.now() - (node.sentMs[index] ?? NaN));
			};
		const seen = watchEvents(bench.store.pool);
		await drive(nodes, WARM_MS);
		measuring = true;
		await drive(nodes, MEASURE_MS);
		await sleep(1_000);
		seen.stop();
		const visible = (await seen.done).flatMap(({ bayId, decidedSeq, atMs }) => {
			const node = nodes.find((one) => one.node.bayId === bayId);
			const sentMs = node?.sentMs[decidedSeq - 1];
			return sentMs === undefined ? [] : [atMs - sentMs];
		});
		for (const node of nodes) node.end();
		latencies.sort((a, b) => a - b);
		visible.sort((a, b) => a - b);
		return {
			perS: PER_S,
			nodes: NODES,
			acknowledgedMs: { p50: quantile(latencies, 0.5), p99: quantile(latencies, 0.99) },
			visibleMs: {
				p50: quantile(visible, 0.5),
				p99: quantile(visible, 0.99),
				changes: visible.length
			}
		};
	} finally {
		await bench.close();
	}
}

/** Publishes at the rate, spread over the nodes and over time. */
async function drive(nodes: readonly SignedNode[], ms: number): Promise<void> {
	const beganMs = performance.now();
	let sent = 0;
	for (;;) {
		const elapsedMs = performance.now() - beganMs;
		if (elapsedMs >= ms) return;
		for (const due = (elapsedMs * PER_S) / 1_000; sent < due; sent += 1)
			nodes[sent % nodes.length]!.send(1);
		await sleep(TICK_MS);
	}
}

interface Seen {
	bayId: number;
	/** Sequence number of the message whose row decided it. */
	decidedSeq: number;
	atMs: number;
}

/** Looks every few ms for new events, as a reader of the change log would. */
function watchEvents(pool: Parameters<typeof select>[0]) {
	let running = true;
	const done = (async () => {
		const seen: Seen[] = [];
		let cursor = 0;
		while (running) {
			const rows = await select<{ id: number; bayId: number; seq: number | null }>(
				pool,
				`SELECT e.id, e.bay_id AS bayId, (SELECT MIN(r.seq) FROM history h JOIN node n ON n.bay_id = h.bay_id
					JOIN reading r ON r.node_id = n.id AND r.at_ms = h.decided_at_ms WHERE h.event_id = e.id AND h.bay_id = e.bay_id) AS seq
				 FROM event e WHERE e.id > ? AND e.type IN ('arrival', 'departure') ORDER BY e.id`,
				[cursor]
			);
			const atMs = performance.now();
			for (const { id, bayId, seq } of rows) {
				cursor = id;
				if (seq !== null && seq > 0) seen.push({ bayId, decidedSeq: seq, atMs });
			}
			await sleep(TICK_MS);
		}
		return seen;
	})();
	return { done, stop: () => (running = false) };
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href)
	process.stdout.write(`${JSON.stringify({ bench: 'latency', ...(await measureLatency()) })}\n`);
