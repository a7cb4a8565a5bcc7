import { select, type Sql } from './bulk';

/** Length of unexplained drift in one closed hour, mG. */
export interface DriftHour {
	nodeId: number;
	atMs: number;
	valueMg: number;
}

/** Closed vacant hours of these nodes since an instant, by node and time. */
export async function unexplained(
	sql: Sql,
	nodeIds: readonly number[],
	sinceMs: number
): Promise<Map<number, DriftHour[]>> {
	if (nodeIds.length === 0) return new Map();
	const rows = await select<DriftHour>(
		sql,
		`SELECT node_id AS nodeId, hour_ms AS atMs, SQRT(POW(unexplained_x_ug, 2) + POW(unexplained_y_ug, 2)
			+ POW(unexplained_z_ug, 2)) / 1000 AS valueMg
		 FROM drift_hour WHERE node_id IN (?) AND hour_ms >= ? AND unexplained_x_ug IS NOT NULL
		 ORDER BY node_id, hour_ms`,
		[nodeIds, sinceMs]
	);
	const hours = new Map<number, DriftHour[]>();
	for (const row of rows) {
		const own = hours.get(row.nodeId);
		if (own === undefined) hours.set(row.nodeId, [row]);
		else own.push(row);
	}
	return hours;
}
