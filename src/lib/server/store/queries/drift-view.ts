import { select, type Sql } from './bulk';

/** A node in a bay with what is shown of it and what drift remembers of it. */
export interface ViewRow {
	nodeId: number;
	serial: string;
	bay: string;
	zone: string;
	headingDeg: number | null;
	condition: string | null;
	also: string | null;
	/** When what is shown of the bay last changed. */
	changedAtMs: number | null;
	/** Null before the first closed hour of this placing. */
	memory: Uint8Array | null;
}

/** The same with a checksum for the memory, which need not travel. */
export interface MarkedRow extends Omit<ViewRow, 'memory'> {
	/** Null before the first closed hour of this placing. */
	memoryMark: string | null;
}

const SHOWN = `n.id AS nodeId, n.serial, b.code AS bay, z.code AS zone, n.heading_deg AS headingDeg, s.condition, s.also,
	c.recorded_at_ms AS changedAtMs`;
const FROM = ` FROM node n JOIN bay b ON b.id = n.bay_id JOIN zone z ON z.id = b.zone_id
 LEFT JOIN bay_state s ON s.bay_id = b.id AND s.node_id = n.id
 LEFT JOIN \`change\` c ON c.site_id = s.site_id AND c.id = s.change_id
 LEFT JOIN drift_node d ON d.node_id = n.id AND d.placed_at_ms = n.placed_at_ms
 WHERE n.withdrawn_at_ms IS NULL`;
const VIEW = `SELECT ${SHOWN}, d.memory ${FROM}`;

/** Nodes of a site that lie in a bay, by bay. */
export async function ofSite(sql: Sql, siteId: number): Promise<ViewRow[]> {
	return await select(sql, `${VIEW} AND n.site_id = ? ORDER BY b.code, n.id`, [siteId]);
}

export async function ofNode(sql: Sql, nodeId: number): Promise<ViewRow | null> {
	const rows = await select<ViewRow>(sql, `${VIEW} AND n.id = ?`, [nodeId]);
	return rows[0] ?? null;
}

/** Nodes of a site that lie in a bay, by bay, without their memories. */
export async function markedOfSite(sql: Sql, siteId: number): Promise<MarkedRow[]> {
	return await select(
		sql,
		`SELECT ${SHOWN}, CONCAT(CRC32(d.memory), ' ', LENGTH(d.memory)) AS memoryMark ${FROM}
		 AND n.site_id = ? ORDER BY b.code, n.id`,
		[siteId]
	);
}

/** Memories of some nodes. */
export async function memoriesOf(
	sql: Sql,
	nodeIds: readonly number[]
): Promise<Map<number, Uint8Array>> {
	if (nodeIds.length === 0) return new Map();
	const rows = await select<{ nodeId: number; memory: Uint8Array }>(
		sql,
		`SELECT node_id AS nodeId, memory FROM drift_node WHERE node_id IN (?)`,
		[nodeIds]
	);
	return new Map(rows.map(({ nodeId, memory }) => [nodeId, memory]));
}
