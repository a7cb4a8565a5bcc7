import { insertTuples, select, type Sql } from './bulk';

/** 64 messages of one boot: which of them are stored, as two halves that a number holds exactly. */
export interface Block {
	nodeId: number;
	boot: number;
	/** seq >> 6. */
	block: number;
	low: number;
	high: number;
}

/** The stored blocks among those asked for. */
export async function find(
	sql: Sql,
	keys: readonly { nodeId: number; boot: number; block: number }[]
): Promise<Block[]> {
	if (keys.length === 0) return [];
	const list = keys.map((k) => `(${k.nodeId},${k.boot},${k.block})`).join(',');
	return await select(
		sql,
		`SELECT node_id AS nodeId, boot, block, bits & 4294967295 AS low, bits >> 32 AS high
		 FROM received WHERE (node_id, boot, block) IN (${list})`
	);
}

/** ORs bits in; `blocks` sorted by key. */
export async function mark(sql: Sql, blocks: readonly Block[]): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO received (node_id, boot, block, bits)',
		blocks.map(
			(b) =>
				`(${b.nodeId},${b.boot},${b.block},${(BigInt(b.high >>> 0) << 32n) | BigInt(b.low >>> 0)})`
		),
		'ON DUPLICATE KEY UPDATE bits = bits | VALUES(bits)'
	);
}

/** After a boot counter that started anew: the old boots' numbers are free again. */
export async function forget(sql: Sql, nodeId: number): Promise<void> {
	await sql.query('DELETE FROM received WHERE node_id = ?', [nodeId]);
}
