import { run, select, type Sql } from './bulk';

/** What the pipeline needs to know of a node, as registered. */
export interface RegisteredNode {
	id: number;
	serial: string;
	siteId: number;
	bayId: number | null;
	bayCode: string | null;
	/** GeoJSON Polygon as text. */
	geometry: string | null;
	row: string | null;
	profileCode: string;
	profileBody: string;
	keySealed: Buffer | null;
	keyPrevSealed: Buffer | null;
	keyPrevUntilMs: number | null;
	mqttHash: Buffer;
	mqttHashPrev: Buffer | null;
	unsignedAllowed: number;
	eastM: number | null;
	northM: number | null;
	periodS: number;
	deltaMg: number;
	usualPeriodS: number;
	preCommissioned: number;
	placedAtMs: number | null;
	withdrawnAtMs: number | null;
	graceS: number;
	latDeg: number;
	lonDeg: number;
}

const NODES = `SELECT n.id, n.serial, n.site_id AS siteId, n.bay_id AS bayId, b.code AS bayCode, b.geometry, z.code AS \`row\`,
	n.profile_code AS profileCode, p.body AS profileBody, n.key_sealed AS keySealed, n.key_prev_sealed AS keyPrevSealed,
	n.key_prev_until_ms AS keyPrevUntilMs, n.mqtt_hash AS mqttHash, n.mqtt_hash_prev AS mqttHashPrev,
	n.unsigned_allowed AS unsignedAllowed, n.east_m AS eastM, n.north_m AS northM, n.period_s AS periodS,
	n.delta_mg AS deltaMg, n.usual_period_s AS usualPeriodS, n.pre_commissioned AS preCommissioned,
	n.placed_at_ms AS placedAtMs, n.withdrawn_at_ms AS withdrawnAtMs, s.grace_s AS graceS, s.lat_deg AS latDeg, s.lon_deg AS lonDeg
 FROM node n JOIN site s ON s.id = n.site_id JOIN profile p ON p.code = n.profile_code
 LEFT JOIN bay b ON b.id = n.bay_id LEFT JOIN zone z ON z.id = b.zone_id`;

/** All nodes, withdrawn ones too: their messages are refused by name. */
export async function nodes(sql: Sql): Promise<RegisteredNode[]> {
	return await select(sql, `${NODES} ORDER BY n.id`);
}

export async function nodesById(sql: Sql, ids: readonly number[]): Promise<RegisteredNode[]> {
	if (ids.length === 0) return [];
	return await select(sql, `${NODES} WHERE n.id IN (?) ORDER BY n.id`, [ids]);
}

export async function nodesBySerial(
	sql: Sql,
	serials: readonly string[]
): Promise<RegisteredNode[]> {
	if (serials.length === 0) return [];
	return await select(sql, `${NODES} WHERE n.serial IN (?) ORDER BY n.id`, [serials]);
}

/** Every override of a setting that ever held: replays judge a row by what held at its own time. */
export async function parameters(sql: Sql): Promise<StoredParameter[]> {
	return await select(
		sql,
		`SELECT site_id AS siteId, node_id AS nodeId, name, value, from_ms AS fromMs, until_ms AS untilMs
		 FROM parameter ORDER BY id`
	);
}

export interface StoredParameter {
	siteId: number;
	nodeId: number | null;
	name: string;
	value: string;
	fromMs: number;
	untilMs: number | null;
}

/** A setting holds, and the one before it ends, with the batch that takes it. */
export async function turnParameters(
	sql: Sql,
	{ began, ended }: { began?: number | undefined; ended?: number | undefined },
	atMs: number
): Promise<void> {
	if (began !== undefined)
		await run(sql, 'UPDATE parameter SET from_ms = ? WHERE id = ?', [atMs, began]);
	if (ended !== undefined)
		await run(sql, 'UPDATE parameter SET until_ms = ? WHERE id = ?', [atMs, ended]);
}

/** Stored part of `node_fast` that the pipeline keeps in memory for every node. */
export interface StoredLive {
	nodeId: number;
	heardAtMs: number;
	heardBoot: number | null;
	rowAtMs: number | null;
	boot: number | null;
	seq: number | null;
	row: number | null;
	waitingFromMs: number | null;
	lastAtMs: number | null;
	x: number | null;
	y: number | null;
	z: number | null;
	polarity: number | null;
	tempDc: number | null;
	batteryMv: number | null;
	rssiDbm: number | null;
	marks: number;
}

export async function lives(sql: Sql, nodeIds: readonly number[] | null): Promise<StoredLive[]> {
	if (nodeIds !== null && nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT node_id AS nodeId, heard_at_ms AS heardAtMs, heard_boot AS heardBoot, row_at_ms AS rowAtMs, boot, seq, \`row\`,
			waiting_from_ms AS waitingFromMs, last_at_ms AS lastAtMs, x, y, z, polarity, temp_dc AS tempDc,
			battery_mv AS batteryMv, rssi_dbm AS rssiDbm, marks
		 FROM node_fast ${nodeIds === null ? '' : 'WHERE node_id IN (?)'}`,
		nodeIds === null ? [] : [nodeIds]
	);
}

/** What a bay shows now, as stored. */
export interface ShownRow {
	bayId: number;
	siteId: number;
	nodeId: number | null;
	state: 'vacant' | 'occupied' | 'unknown';
	sinceMs: number | null;
	confidence20: number | null;
	doubtReason: string | null;
	doubtSinceMs: number | null;
	condition: string;
	also: string;
	lastKnownState: 'vacant' | 'occupied' | 'unknown' | null;
	lastKnownAtMs: number | null;
	evidence: string | null;
}

export async function shown(sql: Sql, bayIds: readonly number[] | null): Promise<ShownRow[]> {
	if (bayIds !== null && bayIds.length === 0) return [];
	return await select(
		sql,
		`SELECT bay_id AS bayId, site_id AS siteId, node_id AS nodeId, state, since_ms AS sinceMs, confidence_20 AS confidence20,
			doubt_reason AS doubtReason, doubt_since_ms AS doubtSinceMs, \`condition\`, also,
			last_known_state AS lastKnownState, last_known_at_ms AS lastKnownAtMs, evidence
		 FROM bay_state ${bayIds === null ? '' : 'WHERE bay_id IN (?)'}`,
		bayIds === null ? [] : [bayIds]
	);
}

const SHOWN_SET = [
	'node_id',
	'state',
	'since_ms',
	'confidence_20',
	'doubt_reason',
	'doubt_since_ms',
	'`condition`',
	'also',
	'last_known_state',
	'last_known_at_ms',
	'evidence',
	'change_id'
]
	.map((column) => `${column} = VALUES(${column})`)
	.join(', ');

export async function writeShown(
	sql: Sql,
	rows: readonly (ShownRow & { changeId: number })[]
): Promise<void> {
	if (rows.length === 0) return;
	await run(
		sql,
		`INSERT INTO bay_state (bay_id, site_id, node_id, state, since_ms, confidence_20, doubt_reason, doubt_since_ms, \`condition\`, also, last_known_state, last_known_at_ms, evidence, change_id)
		 VALUES ? ON DUPLICATE KEY UPDATE ${SHOWN_SET}`,
		[
			rows.map((r) => [
				r.bayId,
				r.siteId,
				r.nodeId,
				r.state,
				r.sinceMs,
				r.confidence20,
				r.doubtReason,
				r.doubtSinceMs,
				r.condition,
				r.also,
				r.lastKnownState,
				r.lastKnownAtMs,
				r.evidence,
				r.changeId
			])
		]
	);
}

/** The newest `unknown` event of a bay that nothing has voided: what a silence told. */
export async function lastUnknown(
	sql: Sql,
	bayId: number
): Promise<{ id: number; atMs: number } | null> {
	const rows = await select<{ id: number; atMs: number }>(
		sql,
		`SELECT e.id, e.at_ms AS atMs FROM event e WHERE e.bay_id = ? AND e.type = 'unknown'
		 AND NOT EXISTS (SELECT 1 FROM event v WHERE v.bay_id = e.bay_id AND v.voids = e.id) ORDER BY e.id DESC LIMIT 1`,
		[bayId]
	);
	return rows[0] ?? null;
}

/** What hello and answered `report` commands tell of a node. Only what came is written. */
export interface NodeFacts {
	nodeId: number;
	firmware?: string;
	bootCause?: string;
	periodS?: number;
	deltaMg?: number;
}

export async function writeFacts(sql: Sql, facts: NodeFacts): Promise<void> {
	const columns = {
		firmware: facts.firmware,
		boot_cause: facts.bootCause,
		period_s: facts.periodS,
		delta_mg: facts.deltaMg
	};
	const set = Object.entries(columns).filter(([, value]) => value !== undefined);
	if (set.length === 0) return;
	await run(sql, `UPDATE node SET ${set.map(([name]) => `${name} = ?`).join(', ')} WHERE id = ?`, [
		...set.map(([, value]) => value),
		facts.nodeId
	]);
}

/** A node enters service on a bay. */
export async function placeNode(
	sql: Sql,
	nodeId: number,
	bayId: number,
	atMs: number,
	preCommissioned: boolean
): Promise<void> {
	await run(
		sql,
		'UPDATE node SET bay_id = ?, placed_at_ms = ?, pre_commissioned = ?, withdrawn_at_ms = NULL WHERE id = ?',
		[bayId, atMs, preCommissioned, nodeId]
	);
}

export async function withdrawNode(sql: Sql, nodeId: number, atMs: number): Promise<void> {
	await run(sql, 'UPDATE node SET bay_id = NULL, withdrawn_at_ms = ? WHERE id = ?', [atMs, nodeId]);
}

/** Another node that holds the bay, or null. */
export async function holderOfBay(
	sql: Sql,
	bayId: number,
	exceptNodeId: number
): Promise<string | null> {
	const rows = await select<{ serial: string }>(
		sql,
		'SELECT serial FROM node WHERE bay_id = ? AND id <> ? AND withdrawn_at_ms IS NULL LIMIT 1',
		[bayId, exceptNodeId]
	);
	return rows[0]?.serial ?? null;
}

export async function writeBoot(
	sql: Sql,
	boot: {
		nodeId: number;
		boot: number;
		atMs: number;
		firmware: string | null;
		profileCode: string | null;
		cause: string | null;
	}
): Promise<void> {
	await run(
		sql,
		`INSERT INTO boot (node_id, boot, at_ms, firmware, profile_code, cause) VALUES (?)
		 ON DUPLICATE KEY UPDATE at_ms = VALUES(at_ms), firmware = VALUES(firmware), profile_code = VALUES(profile_code), cause = VALUES(cause)`,
		[[boot.nodeId, boot.boot, boot.atMs, boot.firmware, boot.profileCode, boot.cause]]
	);
}
