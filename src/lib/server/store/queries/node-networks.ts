import { run, type Sql } from './bulk';

/** From where nodes last connected; serials that are not (or no longer) registered are left out. */
export async function noteNetworks(
	sql: Sql,
	networks: ReadonlyMap<string, string>,
	nowMs: number
): Promise<void> {
	if (networks.size === 0) return;
	const rows = [...networks];
	const listed = rows.map(() => 'SELECT ? AS serial, ? AS network').join(' UNION ALL ');
	await run(
		sql,
		`INSERT INTO node_network (node_id, network, since_ms)
		 SELECT n.id, v.network, ? FROM (${listed}) v JOIN node n ON n.serial = v.serial
		 ON DUPLICATE KEY UPDATE
			since_ms = IF(node_network.network = VALUES(network), node_network.since_ms, VALUES(since_ms)),
			network = VALUES(network)`,
		[nowMs, ...rows.flat()]
	);
}
