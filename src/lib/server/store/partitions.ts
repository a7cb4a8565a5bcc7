import {
	createConnection,
	type Connection,
	type PoolConnection,
	type RowDataPacket
} from 'mysql2/promise';
import { CONNECTION_OPTIONS, SESSION_SQL } from './connect';

export const DAY_MS = 86_400_000;

/** Ingest would stop at the end of the last partition: a month is time to notice and to mend. */
export const DAYS_AHEAD = 30;

/** Rows up to 14 days old move states; a week more leaves single days to drop. */
export const DAYS_BACK = 21;

/** A partition holds the rows from the bound before it up to its own, which is not included. */
export interface Partition {
	name: string;
	untilMs: number;
}

interface PartitionRow extends RowDataPacket {
	name: string;
	bound: string;
}

export async function listPartitions(
	connection: Connection | PoolConnection
): Promise<Partition[]> {
	const [rows] = await connection.query<PartitionRow[]>(
		`SELECT PARTITION_NAME AS name, PARTITION_DESCRIPTION AS bound
		 FROM information_schema.PARTITIONS
		 WHERE TABLE_SCHEMA = DATABASE() AND TABLE_NAME = 'reading' AND PARTITION_NAME IS NOT NULL
		 ORDER BY PARTITION_ORDINAL_POSITION`
	);
	return rows.map(({ name, bound }) => ({ name, untilMs: Number(bound) }));
}

/** Bounds still to be made after `lastUntilMs`; the first may span many days when the product stood still. */
export function missingBounds(lastUntilMs: number, nowMs: number): number[] {
	const todayMs = Math.floor(nowMs / DAY_MS) * DAY_MS;
	const bounds: number[] = [];
	const firstMs = Math.max(lastUntilMs + DAY_MS, todayMs - DAYS_BACK * DAY_MS);
	for (let ms = firstMs; ms <= todayMs + (DAYS_AHEAD + 1) * DAY_MS; ms += DAY_MS) bounds.push(ms);
	return bounds;
}

/** Named after the last UTC day it holds. */
const nameOf = (untilMs: number) =>
	`p${new Date(untilMs - 1).toISOString().slice(0, 10).replaceAll('-', '')}`;

/** Makes the partitions of `reading` for the days to come. Returns how many; 0 when all are there. */
export async function ensurePartitions(url: string, nowMs: number): Promise<number> {
	return await altering(url, async (connection) => {
		const last = (await listPartitions(connection)).at(-1);
		if (last === undefined) throw new Error('Table reading has no partitions.');
		const bounds = missingBounds(last.untilMs, nowMs);
		if (bounds.length === 0) return 0;
		const clauses = bounds.map((ms) => `PARTITION ${nameOf(ms)} VALUES LESS THAN (${ms})`);
		await patiently(connection, `ALTER TABLE reading ADD PARTITION (${clauses.join(', ')})`);
		return bounds.length;
	});
}

/** Drops the partitions whose every row is older than `beforeMs`. Returns their names. */
export async function dropPartitions(url: string, beforeMs: number): Promise<string[]> {
	return await altering(url, async (connection) => {
		const all = await listPartitions(connection);
		// The last one stays whatever happens: a table must keep one partition.
		const names = all
			.slice(0, -1)
			.filter(({ untilMs }) => untilMs <= beforeMs)
			.map(({ name }) => name);
		if (names.length > 0)
			await patiently(connection, `ALTER TABLE reading DROP PARTITION ${names.join(', ')}`);
		return names;
	});
}

async function altering<T>(url: string, work: (connection: Connection) => Promise<T>): Promise<T> {
	const connection = await createConnection({ uri: url, ...CONNECTION_OPTIONS });
	try {
		await connection.query(SESSION_SQL);
		return await work(connection);
	} finally {
		connection.destroy();
	}
}

/** How often and how far apart an ALTER is tried. Every try holds ingest up for at most a second. */
const TRIES = 60;
const PAUSE_MS = 2_000;

/**
 * Runs an ALTER that needs the table for itself. A long reader would make it wait, and everything
 * after it, ingest too, would wait behind it: so it gives up after a second and tries again later.
 */
async function patiently(connection: Connection, sql: string): Promise<void> {
	await connection.query('SET SESSION lock_wait_timeout = 1');
	for (let attempt = 1; ; attempt += 1) {
		try {
			await connection.query(sql);
			return;
		} catch (error) {
			const { errno } = error as { errno?: number };
			if (isDoneByAnother(errno)) return;
			if (errno !== 1205 || attempt === TRIES) throw error;
			await new Promise((resolve) => setTimeout(resolve, PAUSE_MS));
		}
	}
}

/** 1517 same name, 1493 bound not above the last, 1507 no such partition: another process was first. */
const isDoneByAnother = (errno: number | undefined) =>
	errno === 1517 || errno === 1493 || errno === 1507;
