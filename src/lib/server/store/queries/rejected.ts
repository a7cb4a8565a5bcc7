import type { Refusal } from '$lib/wire/types';
import { run, select, type Sql } from './bulk';

export interface RejectedMessage {
	atMs: number;
	serial: string;
	nodeId: number | null;
	topic: string;
	reason: Refusal;
	detail: string;
	/** The first 512 bytes. */
	head: Uint8Array;
	lengthBytes: number;
}

/** At most this many an hour and serial are kept (protocol, after step 5). */
export const KEPT_PER_HOUR = 20;

/** How many of each serial were kept since `sinceMs`. */
export async function keptSince(
	sql: Sql,
	serials: readonly string[],
	sinceMs: number
): Promise<Map<string, number>> {
	if (serials.length === 0) return new Map();
	const rows = await select<{ serial: string; n: number }>(
		sql,
		'SELECT serial, COUNT(*) AS n FROM rejected WHERE serial IN (?) AND at_ms > ? GROUP BY serial',
		[serials, sinceMs]
	);
	return new Map(rows.map(({ serial, n }) => [serial, n]));
}

export async function insert(sql: Sql, messages: readonly RejectedMessage[]): Promise<void> {
	if (messages.length === 0) return;
	await run(
		sql,
		'INSERT INTO rejected (at_ms, serial, node_id, topic, reason, detail, head, length_bytes) VALUES ?',
		[
			messages.map((m) => [
				m.atMs,
				m.serial.slice(0, 32),
				m.nodeId,
				m.topic.slice(0, 120),
				m.reason,
				m.detail.slice(0, 200),
				Buffer.from(m.head),
				m.lengthBytes
			])
		]
	);
}
