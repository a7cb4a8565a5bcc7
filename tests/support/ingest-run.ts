import type { IClientOptions } from 'mqtt';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import type { Subscriber } from '$lib/server/ingest/subscriber-types';
import { createSecret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import { Bench } from './broker';
import { startDatabase, type TestDatabase } from './database';
import {
	act,
	eventually,
	makeSite,
	openStore,
	runPipeline,
	sealed,
	SECRET,
	select,
	type SiteOptions,
	type TestNode,
	type TestSite
} from './ingest';
import { MqttNode } from './mqtt-node';
import type { UpFrame } from '$lib/wire/types';

/** Database, broker and pipeline of one test file, with one site. */
export class IngestRun {
	readonly bench = new Bench();
	database!: TestDatabase;
	store!: Store;
	site!: TestSite;
	pipeline!: Pipeline;
	subscriber!: Subscriber;
	port!: number;
	/** Turned to false, the disk counts as full. */
	mayStore = true;
	readonly #clients = new Map<string, Promise<MqttNode>>();

	async begin(options: SiteOptions, extra: readonly TestNode['key'][] = []): Promise<this> {
		this.database = this.bench.ending(await startDatabase(), async (d) => await d.close());
		this.store = this.bench.ending(openStore(this.database.url), async (s) => await s.close());
		this.site = await makeSite(this.store, createSecret(SECRET), options);
		this.port = (await this.bench.broker()).port;
		const keys = [...this.site.nodes.map(({ key }) => key), ...extra];
		await this.beginPipeline(keys);
		return this;
	}

	/** The first pipeline, or the next after the one before was closed. */
	async beginPipeline(keys = this.site.nodes.map(({ key }) => key)): Promise<void> {
		this.subscriber = await this.bench.subscriber(this.port, keys);
		this.pipeline = this.bench.ending(
			await runPipeline(this.store, this.subscriber, createSecret(SECRET), () => this.mayStore),
			async (p) => await p.close()
		);
	}

	async end(): Promise<void> {
		await this.bench.end();
	}

	node(i: number): TestNode {
		const node = this.site.nodes[i];
		if (node === undefined) throw new RangeError(`no node ${i}`);
		return node;
	}

	/** Writes acts and waits until the pipeline has taken them; returns what it said of each. */
	async acts(
		wanted: readonly [node: TestNode, kind: string, args: object, atMs: number][]
	): Promise<string[]> {
		const ids: number[] = [];
		for (const [node, kind, args, atMs] of wanted)
			ids.push(await act(this.store, this.site.siteId, node, kind, args, atMs));
		this.pipeline.nudge();
		const rows = await eventually(
			async () =>
				await select<{ outcome: string | null; takenAtMs: number | null }>(
					this.store.pool,
					'SELECT outcome, taken_at_ms AS takenAtMs FROM act WHERE id IN (?) ORDER BY id',
					[ids]
				),
			(seen) => seen.every(({ takenAtMs }) => takenAtMs !== null)
		);
		return rows.map(({ outcome }) => outcome ?? '');
	}

	async client(
		node: Pick<TestNode, 'serial' | 'key'>,
		options: IClientOptions = {}
	): Promise<MqttNode> {
		// The promise is kept: two connections of one serial would push each other out for ever.
		let client = this.#clients.get(node.serial);
		if (client === undefined)
			this.#clients.set(node.serial, (client = this.#connect(node, options)));
		return await client;
	}

	async #connect(
		node: Pick<TestNode, 'serial' | 'key'>,
		options: IClientOptions
	): Promise<MqttNode> {
		return this.bench.ending(
			await MqttNode.connect(this.port, node.key, options),
			async (c) => await c.end()
		);
	}

	/** Resolves with the PUBACK: the frame is committed. */
	async send(node: TestNode, frame: UpFrame): Promise<void> {
		await this.sendBytes(node, frame.kind, sealed(node, frame));
	}

	async sendBytes(
		node: Pick<TestNode, 'serial' | 'key'>,
		kind: string,
		bytes: Uint8Array
	): Promise<void> {
		const { client } = await this.client(node);
		await client.publishAsync(`lodekeep/1/${node.serial}/up/${kind}`, Buffer.from(bytes), {
			qos: 1
		});
	}

	async rows<T>(sql: string, values: readonly unknown[] = []): Promise<T[]> {
		return await select<T>(this.store.pool, sql, values);
	}

	/** Effective history of a bay: what a replay would say. */
	async history(bayId: number): Promise<{ type: string; state: string; atMs: number }[]> {
		return await this.rows(
			'SELECT type, state, at_ms AS atMs FROM history WHERE bay_id = ? AND voided_at_ms IS NULL ORDER BY at_ms, id',
			[bayId]
		);
	}

	/** The feed without what was voided and the voiders (api.md, `effective=true`). */
	async feed(
		bayId: number
	): Promise<{ type: string; state: string; atMs: number; late: number }[]> {
		return await this.rows(
			`SELECT e.type, e.state, e.at_ms AS atMs, e.late FROM event e WHERE e.bay_id = ? AND e.type <> 'voided'
			 AND NOT EXISTS (SELECT 1 FROM event v WHERE v.site_id = e.site_id AND v.voids = e.id) ORDER BY e.at_ms, e.id`,
			[bayId]
		);
	}
}
