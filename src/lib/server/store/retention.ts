import { createConnection, type Connection, type RowDataPacket } from 'mysql2/promise';
import { CONNECTION_OPTIONS, SESSION_SQL } from './connect';
import { DAY_MS, dropPartitions, ensurePartitions } from './partitions';
import { PERSONAL_KEPT_MS } from './queries/events';
import { loopOf, mailOf } from './retention-loop';

/** Rows a delete takes: small enough to be over before a batch of ingest waits for it. */
const SLICE_ROWS = 5_000;
const PAUSE_MS = 20;

/** Kept for people to look into, not part of the record; days. */
const KEPT_DAYS = { rejected: 90, sentMail: 30, spentTicket: 30, idempotency: 1 };

/** History of a personal bay is needed as long as late rows may be replayed (14 days). */
const REPLAY_DAYS = 15;

/** How far the clocks of days are trusted: a partition goes a day after the last site let go of it. */
const MARGIN_MS = DAY_MS;

export interface RetentionReport {
	partitionsMade: number;
	partitionsDropped: string[];
	rowsDeleted: number;
}

interface SiteRow extends RowDataPacket {
	id: number;
	readingDays: number;
	eventDays: number;
}

interface IdRow extends RowDataPacket {
	id: number;
}

/**
 * Lets go of what nobody keeps any more. A day of readings that no site keeps is dropped whole; a
 * site that keeps less is purged by small deletes. Only one copy works at a time; another returns null.
 */
export async function keepHouse(url: string, nowMs: number): Promise<RetentionReport | null> {
	const connection = await createConnection({ uri: url, ...CONNECTION_OPTIONS });
	try {
		await connection.query(SESSION_SQL);
		const [locks] = await connection.query<RowDataPacket[]>(
			"SELECT GET_LOCK(CONCAT('lodekeep retention ', DATABASE()), 0) AS got"
		);
		if (locks[0]?.['got'] !== 1) return null;
		const [sites] = await connection.query<SiteRow[]>(
			'SELECT id, reading_days AS readingDays, event_days AS eventDays FROM site'
		);
		const partitionsMade = await ensurePartitions(url, nowMs);
		const partitionsDropped = await dropDays(url, sites, nowMs);
		let rowsDeleted = await purgeOwn(connection, nowMs);
		for (const site of sites) rowsDeleted += await purgeSite(connection, site, nowMs);
		return { partitionsMade, partitionsDropped, rowsDeleted };
	} finally {
		connection.destroy();
	}
}

async function dropDays(url: string, sites: SiteRow[], nowMs: number): Promise<string[]> {
	if (sites.length === 0) return [];
	const mostDays = Math.max(...sites.map(({ readingDays }) => readingDays));
	return await dropPartitions(url, nowMs - mostDays * DAY_MS - MARGIN_MS);
}

async function purgeSite(connection: Connection, site: SiteRow, nowMs: number): Promise<number> {
	const readingsMs = nowMs - site.readingDays * DAY_MS;
	const eventsMs = nowMs - site.eventDays * DAY_MS;
	let deleted = await purgeLog(connection, site.id, eventsMs);
	for (const [from, values] of loopOf(site.id, eventsMs))
		deleted += await purge(connection, from, values);
	for (const nodeId of await idsOf(connection, 'node WHERE site_id = ?', site.id)) {
		deleted += await purge(connection, 'reading WHERE node_id = ? AND at_ms < ?', [
			nodeId,
			readingsMs
		]);
		deleted += await purge(connection, 'reading_hour WHERE node_id = ? AND hour_ms < ?', [
			nodeId,
			eventsMs
		]);
		deleted += await purge(connection, 'drift_hour WHERE node_id = ? AND hour_ms < ?', [
			nodeId,
			eventsMs
		]);
		deleted += await purge(connection, 'node_count WHERE node_id = ? AND day_ms < ?', [
			nodeId,
			eventsMs
		]);
	}
	deleted += await purge(connection, 'drift_line WHERE site_id = ? AND hour_ms < ?', [
		site.id,
		eventsMs
	]);
	for (const bayId of await idsOf(connection, 'bay WHERE site_id = ?', site.id))
		deleted += await purgeHistory(connection, bayId, eventsMs);
	for (const bayId of await idsOf(connection, 'bay WHERE site_id = ? AND personal', site.id))
		deleted += await purgePersonal(connection, bayId, nowMs);
	return deleted;
}

/**
 * Events of a bay tied to one household go after a day; its newest stays, the bay's state stands on
 * it. (Readers are shown no older ones either way.)
 */
async function purgePersonal(
	connection: Connection,
	bayId: number,
	nowMs: number
): Promise<number> {
	const [rows] = await connection.query<IdRow[]>(
		'SELECT MAX(id) AS id FROM event WHERE bay_id = ?',
		[bayId]
	);
	const beforeMs = nowMs - PERSONAL_KEPT_MS;
	const events = await purge(
		connection,
		'event WHERE bay_id = ? AND at_ms < ? AND recorded_at_ms < ? AND id <> ?',
		[bayId, beforeMs, beforeMs, rows[0]?.id ?? 0]
	);
	return events + (await purgeHistory(connection, bayId, nowMs - REPLAY_DAYS * DAY_MS));
}

async function idsOf(connection: Connection, from: string, siteId: number): Promise<number[]> {
	const [rows] = await connection.query<IdRow[]>(`SELECT id FROM ${from}`, [siteId]);
	return rows.map(({ id }) => id);
}

/**
 * The change log and its events, from the oldest end, in slices. The site's first id moves in the same
 * transaction: a reader with an older cursor is told to read all again, and never sees a hole.
 */
async function purgeLog(connection: Connection, siteId: number, beforeMs: number): Promise<number> {
	let deleted = 0;
	for (;;) {
		const [rows] = await connection.query<IdRow[]>(
			`SELECT id FROM (SELECT id, recorded_at_ms FROM \`change\` WHERE site_id = ? ORDER BY id LIMIT ?) AS slice
			 WHERE recorded_at_ms < ? ORDER BY id DESC LIMIT 1`,
			[siteId, SLICE_ROWS, beforeMs]
		);
		const lastId = rows[0]?.id;
		if (lastId === undefined) return deleted;
		await connection.beginTransaction();
		await connection.query('UPDATE site SET first_change = ? WHERE id = ? AND first_change <= ?', [
			lastId + 1,
			siteId,
			lastId
		]);
		deleted += await remove(connection, 'event WHERE site_id = ? AND id <= ?', [siteId, lastId]);
		deleted += await remove(connection, '`change` WHERE site_id = ? AND id <= ?', [siteId, lastId]);
		await connection.commit();
		await pause();
	}
}

/** The newest entry before the limit stays: it says in what state the bay entered what is kept. */
async function purgeHistory(
	connection: Connection,
	bayId: number,
	beforeMs: number
): Promise<number> {
	const [rows] = await connection.query<IdRow[]>(
		`SELECT id FROM history WHERE bay_id = ? AND at_ms < ? AND voided_at_ms IS NULL
		 ORDER BY at_ms DESC, id DESC LIMIT 1`,
		[bayId, beforeMs]
	);
	return await purge(connection, 'history WHERE bay_id = ? AND at_ms < ? AND id <> ?', [
		bayId,
		beforeMs,
		rows[0]?.id ?? 0
	]);
}

/** What belongs to no site, or is only of passing use. */
async function purgeOwn(connection: Connection, nowMs: number): Promise<number> {
	const before = (days: number) => [nowMs - days * DAY_MS];
	const rejected = before(KEPT_DAYS.rejected);
	const idempotency = before(KEPT_DAYS.idempotency);
	const mail = before(KEPT_DAYS.sentMail);
	const tickets = before(KEPT_DAYS.spentTicket);
	let told = 0;
	for (const [from, values] of mailOf(nowMs)) told += await purge(connection, from, values);
	return (
		told +
		(await purge(connection, 'rejected WHERE at_ms < ?', rejected)) +
		(await purge(connection, 'idempotency WHERE created_at_ms < ?', idempotency)) +
		(await purge(connection, 'outbox WHERE sent_at_ms < ?', mail)) +
		(await purge(connection, 'outbox WHERE given_up_at_ms < ?', mail)) +
		(await purge(connection, 'ticket WHERE expires_at_ms < ?', tickets))
	);
}

/** Deletes in slices with a pause between them. */
async function purge(connection: Connection, from: string, values: number[]): Promise<number> {
	let deleted = 0;
	for (;;) {
		const slice = await remove(connection, `${from} LIMIT ${SLICE_ROWS}`, values);
		deleted += slice;
		if (slice < SLICE_ROWS) return deleted;
		await pause();
	}
}

async function remove(connection: Connection, from: string, values: number[]): Promise<number> {
	const [result] = await connection.query(`DELETE FROM ${from}`, values);
	return (result as { affectedRows: number }).affectedRows;
}

const pause = async () => {
	await new Promise((resolve) => setTimeout(resolve, PAUSE_MS));
};
