import { hexLiteral, insertTuples, numeral, run, select, type Sql } from './bulk';

/** How far a site is closed. */
export interface DriftSite {
	siteId: number;
	fromMs: number;
	closedToMs: number;
	pairRule: 'calibrate' | 'diagnose' | 'never';
	timezone: string;
	quietFromMin: number;
	quietToMin: number;
}

/** Sites with drift, and, with `fromMs` null, those whose first hour is yet to come. */
export async function sites(
	sql: Sql
): Promise<
	(Omit<DriftSite, 'fromMs' | 'closedToMs'> & Record<'fromMs' | 'closedToMs', number | null>)[]
> {
	return await select(
		sql,
		`SELECT s.id AS siteId, d.from_ms AS fromMs, d.closed_to_ms AS closedToMs, s.pair_rule AS pairRule, s.timezone,
			s.quiet_from_min AS quietFromMin, s.quiet_to_min AS quietToMin
		 FROM site s LEFT JOIN drift_site d ON d.site_id = s.id WHERE s.removed_at_ms IS NULL ORDER BY s.id`
	);
}

export async function siteOf(
	sql: Sql,
	siteId: number
): Promise<{ fromMs: number; closedToMs: number } | null> {
	const rows = await select<{ fromMs: number; closedToMs: number }>(
		sql,
		'SELECT from_ms AS fromMs, closed_to_ms AS closedToMs FROM drift_site WHERE site_id = ?',
		[siteId]
	);
	return rows[0] ?? null;
}

export async function writeSite(
	sql: Sql,
	site: { siteId: number; fromMs: number; closedToMs: number }
): Promise<void> {
	await run(
		sql,
		`INSERT INTO drift_site (site_id, from_ms, closed_to_ms) VALUES (?)
		 ON DUPLICATE KEY UPDATE from_ms = VALUES(from_ms), closed_to_ms = VALUES(closed_to_ms)`,
		[[site.siteId, site.fromMs, site.closedToMs]]
	);
}

/** Closed hours that something touched afterwards. */
export async function mark(
	sql: Sql,
	marks: readonly { siteId: number; hourMs: number }[],
	stampMs: number
): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO drift_mark (site_id, hour_ms, marked_at_ms)',
		marks.map(({ siteId, hourMs }) => `(${siteId},${hourMs},${stampMs})`),
		'ON DUPLICATE KEY UPDATE marked_at_ms = VALUES(marked_at_ms)'
	);
}

/** The earliest marked hour of each site, and its newest mark. */
export async function marks(
	sql: Sql
): Promise<{ siteId: number; hourMs: number; newestMs: number }[]> {
	return await select(
		sql,
		'SELECT site_id AS siteId, MIN(hour_ms) AS hourMs, MAX(marked_at_ms) AS newestMs FROM drift_mark GROUP BY site_id'
	);
}

export async function clearMarks(sql: Sql, siteId: number, toStampMs: number): Promise<void> {
	await run(sql, 'DELETE FROM drift_mark WHERE site_id = ? AND marked_at_ms <= ?', [
		siteId,
		toStampMs
	]);
}

/** One row of `drift_node`. */
export interface MemoryRow {
	nodeId: number;
	siteId: number;
	placedAtMs: number;
	memory: Uint8Array;
	driftingSinceMs: number | null;
	refreshSinceMs: number | null;
	pairWanted: 'calibrate' | 'diagnose' | null;
}

const MEMORY = `node_id AS nodeId, site_id AS siteId, placed_at_ms AS placedAtMs, memory, drifting_since_ms AS driftingSinceMs,
	refresh_since_ms AS refreshSinceMs, pair_wanted AS pairWanted`;

export async function memories(sql: Sql, nodeIds: readonly number[]): Promise<MemoryRow[]> {
	if (nodeIds.length === 0) return [];
	return await select(sql, `SELECT ${MEMORY} FROM drift_node WHERE node_id IN (?)`, [nodeIds]);
}

/** Rows of a memory in one statement: 4 kB each, twice that as text. */
const MEMORY_ROWS = 500;

export async function writeMemories(sql: Sql, rows: readonly MemoryRow[]): Promise<void> {
	for (let at = 0; at < rows.length; at += MEMORY_ROWS)
		await insertTuples(
			sql,
			'INSERT INTO drift_node (node_id,site_id,placed_at_ms,memory,drifting_since_ms,refresh_since_ms,pair_wanted)',
			rows
				.slice(at, at + MEMORY_ROWS)
				.map(
					(r) =>
						`(${r.nodeId},${r.siteId},${r.placedAtMs},${hexLiteral(r.memory)},${numeral(r.driftingSinceMs)},${numeral(r.refreshSinceMs)},${r.pairWanted === null ? 'NULL' : `'${r.pairWanted}'`})`
				),
			`ON DUPLICATE KEY UPDATE ${['site_id', 'placed_at_ms', 'memory', 'drifting_since_ms', 'refresh_since_ms', 'pair_wanted'].map((c) => `${c} = VALUES(${c})`).join(', ')}`
		);
}

/** What holds a condition now, as of the last closed hour and of every pulse since. */
export interface FlagRow {
	nodeId: number;
	placedAtMs: number;
	driftingSinceMs: number | null;
	refreshSinceMs: number | null;
}

/**
 * Nodes of sites that drift or are due for a film refresh. A pulse since the hours were closed heals the
 * film, and an accepted pair measures all anew: what was said before it holds no longer.
 */
export async function flags(
	sql: Sql,
	which: { siteIds: readonly number[] } | { nodeIds: readonly number[] | null }
): Promise<FlagRow[]> {
	const ids = 'siteIds' in which ? which.siteIds : which.nodeIds;
	if (ids?.length === 0) return [];
	const of = ids === null ? '' : `AND d.${'siteIds' in which ? 'site_id' : 'node_id'} IN (?)`;
	const since = (more: string) =>
		`EXISTS (SELECT 1 FROM pulse p WHERE p.node_id = d.node_id AND p.at_ms >= s.closed_to_ms AND p.moving = 1 ${more})`;
	return await select(
		sql,
		`SELECT d.node_id AS nodeId, d.placed_at_ms AS placedAtMs,
			IF(${since("AND p.source = 'pair' AND p.accepted = 1")}, NULL, d.drifting_since_ms) AS driftingSinceMs,
			IF(${since('')}, NULL, d.refresh_since_ms) AS refreshSinceMs
		 FROM drift_node d JOIN drift_site s ON s.site_id = d.site_id
		 WHERE (d.drifting_since_ms IS NOT NULL OR d.refresh_since_ms IS NOT NULL) ${of}`,
		ids === null ? [] : [ids]
	);
}

/** Nodes that a site's rule would have a pair of, oldest wish first by node. */
export async function pairsWanted(
	sql: Sql,
	siteId: number
): Promise<{ nodeId: number; placedAtMs: number; wanted: 'calibrate' | 'diagnose' }[]> {
	return await select(
		sql,
		`SELECT node_id AS nodeId, placed_at_ms AS placedAtMs, pair_wanted AS wanted FROM drift_node
		 WHERE site_id = ? AND pair_wanted IS NOT NULL ORDER BY node_id`,
		[siteId]
	);
}

/** Newest pulse, pair and order of a pulse of each node: what a rule must not follow too soon. */
export async function lastPulses(
	sql: Sql,
	nodeIds: readonly number[],
	nowMs: number
): Promise<
	Map<
		number,
		{
			pulseAtMs: number | null;
			pairAtMs: number | null;
			orderedAtMs: number | null;
			open: boolean;
		}
	>
> {
	if (nodeIds.length === 0) return new Map();
	const pulse = 'SELECT MAX(p.at_ms) FROM pulse p WHERE p.node_id = n.id AND p.moving = 1';
	const order = "FROM command c WHERE c.node_id = n.id AND c.verb <> 'report'";
	const rows = await select<{
		nodeId: number;
		pulseAtMs: number | null;
		pairAtMs: number | null;
		orderedAtMs: number | null;
		open: number;
	}>(
		sql,
		`SELECT n.id AS nodeId, (${pulse}) AS pulseAtMs, (${pulse} AND p.source = 'pair') AS pairAtMs,
			(SELECT MAX(c.created_at_ms) ${order}) AS orderedAtMs,
			EXISTS (SELECT 1 ${order} AND c.answered_at_ms IS NULL AND c.expires_at_ms > ?) AS open
		 FROM node n WHERE n.id IN (?)`,
		[nowMs, nodeIds]
	);
	return new Map(rows.map(({ nodeId, open, ...last }) => [nodeId, { ...last, open: open === 1 }]));
}

/** Keeps every memory of a site as of the end of an hour; those too old to be of use go. */
export async function snapshot(
	sql: Sql,
	siteId: number,
	atMs: number,
	keepFromMs: number
): Promise<void> {
	await run(
		sql,
		`INSERT INTO drift_snapshot (site_id, at_ms, node_id, placed_at_ms, memory)
		 SELECT site_id, ?, node_id, placed_at_ms, memory FROM drift_node d WHERE d.site_id = ?
		 ON DUPLICATE KEY UPDATE placed_at_ms = d.placed_at_ms, memory = d.memory`,
		[atMs, siteId]
	);
	await run(sql, 'DELETE FROM drift_snapshot WHERE site_id = ? AND at_ms < ?', [
		siteId,
		keepFromMs
	]);
}

/** The newest turn of a day at or before `atMs` of which memories are kept; null when none is. */
export async function snapshotBefore(
	sql: Sql,
	siteId: number,
	atMs: number
): Promise<number | null> {
	const rows = await select<{ atMs: number | null }>(
		sql,
		'SELECT MAX(at_ms) AS atMs FROM drift_snapshot WHERE site_id = ? AND at_ms <= ?',
		[siteId, atMs]
	);
	return rows[0]?.atMs ?? null;
}

/** Memories of a site as kept at the turn of a day. */
export async function snapshotMemories(
	sql: Sql,
	siteId: number,
	atMs: number
): Promise<Pick<MemoryRow, 'nodeId' | 'siteId' | 'placedAtMs' | 'memory'>[]> {
	return await select(
		sql,
		`SELECT node_id AS nodeId, site_id AS siteId, placed_at_ms AS placedAtMs, memory FROM drift_snapshot
		 WHERE site_id = ? AND at_ms = ?`,
		[siteId, atMs]
	);
}

/** Forgets all that was told of a site from `toMs` on, and every memory: the caller writes those of `toMs`. */
export async function forget(sql: Sql, siteId: number, toMs: number): Promise<void> {
	const nodes = 'SELECT id FROM node WHERE site_id = ?';
	const of = [siteId, toMs];
	await run(sql, 'DELETE FROM drift_node WHERE site_id = ?', [siteId]);
	await run(sql, `DELETE FROM drift_hour WHERE node_id IN (${nodes}) AND hour_ms >= ?`, of);
	await run(sql, `DELETE FROM drift_pair WHERE node_id IN (${nodes}) AND at_ms >= ?`, of);
	await run(sql, 'DELETE FROM drift_line WHERE site_id = ? AND hour_ms >= ?', of);
	await run(sql, 'DELETE FROM drift_snapshot WHERE site_id = ? AND at_ms > ?', of);
}

export interface LineRow {
	hourMs: number;
	verdict: 'known' | 'few_nodes' | 'cause_not_known';
	changeMg: [number, number, number];
	spreadMg: number | null;
	nodes: number;
}

const ug = (mg: number): number => Math.round(mg * 1000);

export async function writeLine(sql: Sql, siteId: number, line: LineRow): Promise<void> {
	const [h, e, z] = line.changeMg;
	const spread = line.spreadMg === null ? null : Math.min(8_388_607, ug(line.spreadMg));
	await run(
		sql,
		`INSERT INTO drift_line (site_id, hour_ms, verdict, h_ug, e_ug, z_ug, spread_ug, nodes) VALUES (?)
		 ON DUPLICATE KEY UPDATE verdict = VALUES(verdict), h_ug = VALUES(h_ug), e_ug = VALUES(e_ug), z_ug = VALUES(z_ug),
			spread_ug = VALUES(spread_ug), nodes = VALUES(nodes)`,
		[[siteId, line.hourMs, line.verdict, ug(h), ug(e), ug(z), spread, line.nodes]]
	);
}

/** The site's line in [fromMs, toMs), by time. */
export async function lines(
	sql: Sql,
	siteId: number,
	fromMs: number,
	toMs: number
): Promise<LineRow[]> {
	const rows = await select<{
		hourMs: number;
		verdict: LineRow['verdict'];
		h: number;
		e: number;
		z: number;
		spread: number | null;
		nodes: number;
	}>(
		sql,
		`SELECT hour_ms AS hourMs, verdict, h_ug AS h, e_ug AS e, z_ug AS z, spread_ug AS spread, nodes FROM drift_line
		 WHERE site_id = ? AND hour_ms >= ? AND hour_ms < ? ORDER BY hour_ms`,
		[siteId, fromMs, toMs]
	);
	return rows.map(({ hourMs, verdict, h, e, z, spread, nodes }) => ({
		...{ hourMs, verdict, nodes },
		changeMg: [h / 1000, e / 1000, z / 1000],
		spreadMg: spread === null ? null : spread / 1000
	}));
}
