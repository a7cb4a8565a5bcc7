import { createHash } from 'node:crypto';
import { pino } from 'pino';
import type { Pool, ResultSetHeader } from 'mysql2/promise';
import { startPipeline, type Pipeline } from '$lib/server/ingest/pipeline';
import type { Subscriber } from '$lib/server/ingest/subscriber-types';
import { createSecret, type Secret } from '$lib/server/secret';
import { connect, type Store } from '$lib/server/store/connect';
import { select } from '$lib/server/store/queries/bulk';
import * as lease from '$lib/server/store/queries/lease';
import { BUILT_IN_PROFILES } from '$lib/magnetics/sensor-profile';
import { sealUp } from '$lib/wire/frames';
import { upTopic } from '$lib/wire/topics';
import type { ReadingFrame, UpFrame } from '$lib/wire/types';
import { SECRET } from './ingest-fixed';
import { testKey, type TestKey } from './mqtt-node';

export { SECRET };

/** Deterministic key of a test node: a child process can sign as it too. */
export const keyFor = (serial: string): TestKey =>
	testKey(serial, createHash('sha256').update(`ingest ${serial}`).digest());

export interface TestNode {
	id: number;
	serial: string;
	bayId: number;
	key: TestKey;
}

export interface TestSite {
	siteId: number;
	nodes: TestNode[];
}

async function insert(pool: Pool, sql: string, values: unknown[]): Promise<number> {
	const [header] = await pool.query<ResultSetHeader>(sql, values);
	return header.insertId;
}

export interface SiteOptions {
	slug?: string;
	nodes: number;
	/** Distance between bays; over 4 m every node is a group of its own. */
	pitchM?: number;
	prefix?: string;
	graceS?: number;
	unsigned?: boolean;
	periodS?: number;
}

/** A site with one bay and one registered node each, in a row; nothing placed yet. */
export async function makeSite(
	store: Store,
	secret: Secret,
	options: SiteOptions
): Promise<TestSite> {
	const { pool } = store;
	const nowMs = Date.now();
	for (const profile of BUILT_IN_PROFILES)
		await pool.query(
			'INSERT INTO profile (code, body, built_in, changed_at_ms) VALUES (?, ?, 1, ?) ON DUPLICATE KEY UPDATE built_in = 1',
			[profile.code, JSON.stringify(profile), nowMs]
		);
	const siteId = await insert(
		pool,
		"INSERT INTO site (slug, name, lat_deg, lon_deg, timezone, grace_s, created_at_ms) VALUES (?, 'Osier Yard', 47.5, -8.2, 'Etc/UTC', ?, ?)",
		[options.slug ?? 'osier-yard', options.graceS ?? 900, nowMs]
	);
	const zoneId = await insert(
		pool,
		"INSERT INTO zone (site_id, code, name) VALUES (?, 'A', 'Row A')",
		[siteId]
	);
	const nodes: TestNode[] = [];
	const prefix = options.prefix ?? 'OSIER';
	for (let i = 0; i < options.nodes; i += 1) {
		const serial = `${prefix}-${String(i + 1).padStart(4, '0')}`;
		const bayId = await insert(
			pool,
			'INSERT INTO bay (site_id, zone_id, code, created_at_ms) VALUES (?, ?, ?, ?)',
			[siteId, zoneId, `A-${i + 1}`, nowMs]
		);
		const key = keyFor(serial);
		const id = await insert(
			pool,
			`INSERT INTO node (serial, site_id, profile_code, mqtt_hash, unsigned_allowed, east_m, north_m, period_s, usual_period_s, created_at_ms)
			 VALUES (?, ?, 'amr-18-16384', ?, ?, ?, 0, ?, ?, ?)`,
			[
				serial,
				siteId,
				Buffer.from(key.entry.hashes[0] as string, 'hex'),
				options.unsigned ?? false,
				i * (options.pitchM ?? 10),
				options.periodS ?? 60,
				options.periodS ?? 60,
				nowMs
			]
		);
		await pool.query('UPDATE node SET key_sealed = ? WHERE id = ?', [
			secret.seal('node key', id, key.key),
			id
		]);
		nodes.push({ id, serial, bayId, key });
	}
	return { siteId, nodes };
}

/** An act as a route writes it. */
export async function act(
	store: Store,
	siteId: number,
	node: TestNode,
	kind: string,
	args: object,
	atMs: number
): Promise<number> {
	return await insert(
		store.pool,
		"INSERT INTO act (site_id, node_id, bay_id, kind, at_ms, args, by_actor, recorded_at_ms) VALUES (?, ?, ?, ?, ?, ?, 'person:1', ?)",
		[siteId, node.id, node.bayId, kind, atMs, JSON.stringify(args), Date.now()]
	);
}

export const quietLog = () => pino({ level: process.env['TEST_LOG'] ?? 'silent' });

/** The pipeline itself, under its lease, without a supervisor. */
export async function runPipeline(
	store: Store,
	subscriber: Subscriber,
	secret: Secret = createSecret(SECRET),
	mayStore: () => boolean = () => true
): Promise<Pipeline> {
	const holder = `test-${process.pid}`;
	if (!(await lease.hold(store.pool, lease.PIPELINE_LEASE, holder))) throw new Error('No lease.');
	const keep = setInterval(() => {
		void lease.hold(store.pool, lease.PIPELINE_LEASE, holder).catch(() => undefined);
	}, 3_000);
	const pipeline = await startPipeline({
		store,
		subscriber,
		secret,
		log: quietLog(),
		holder,
		mayStore,
		onLost: () => undefined
	});
	const close = pipeline.close.bind(pipeline);
	pipeline.close = async () => {
		clearInterval(keep);
		await close();
		await lease.release(store.pool, lease.PIPELINE_LEASE, holder).catch(() => undefined);
	};
	return pipeline;
}

export const openStore = (url: string): Store => connect(url);

type Counts = readonly [number, number, number];

/** A quiet field of about 480 mG, in counts of amr-18-16384. */
export const QUIET: Counts = [2_949, -410, 7_209];
/** The same with a vehicle over it: about 212 mG more. */
export const TAKEN: Counts = [2_949, -410, 10_682];

/** Noise of up to 1 count (0.06 mG), the same for the same row. */
export const noisy = (c: Counts, i: number): Counts => [
	c[0] + ((i * 7) % 3) - 1,
	c[1] + ((i * 5) % 3) - 1,
	c[2] + ((i * 11) % 3) - 1
];

export interface ReadingOptions {
	boot?: number;
	seq: number;
	t: number;
	rows: readonly (readonly [dtMs: number, counts: Counts])[];
	sentMs?: number;
	tempDc?: number;
}

export const reading = (o: ReadingOptions): ReadingFrame => ({
	kind: 'reading',
	boot: o.boot ?? 1,
	seq: o.seq,
	t: o.t,
	sentMs: o.sentMs ?? null,
	unsigned: false,
	rows: o.rows.map(([dtMs, counts]) => ({ dtMs, counts, tempDc: null })),
	polarity: 1,
	tempDc: o.tempDc ?? 150,
	batteryMv: 3_600,
	rssiDbm: -70,
	pulse: null,
	tx: null
});

export const sealed = (node: Pick<TestNode, 'serial' | 'key'>, frame: UpFrame): Uint8Array =>
	sealUp(upTopic(node.serial, frame.kind), frame, node.key.key, 5);

export { select };

/** Looks until it is good; gives back what was seen last. */
export async function eventually<T>(
	look: () => Promise<T>,
	good: (seen: T) => boolean,
	limitMs = 15_000
): Promise<T> {
	const endMs = Date.now() + limitMs;
	for (;;) {
		const seen = await look();
		if (good(seen) || Date.now() > endMs) return seen;
		await new Promise((resolve) => setTimeout(resolve, 40));
	}
}
