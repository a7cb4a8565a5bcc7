import { run, select, type Sql } from './bulk';

/** The one pipeline of a deployment. */
export const PIPELINE_LEASE = 'pipeline';
/** A holder that says nothing for this long has lost the lease. */
export const LEASE_MS = 15_000;

/** The database's clock, so that copies on machines with other clocks agree. */
const NOW_MS = 'CAST(UNIX_TIMESTAMP(NOW(3)) * 1000 AS SIGNED)';

/** Takes, keeps or is refused the lease: true when `holder` has it now. */
export async function hold(sql: Sql, name: string, holder: string): Promise<boolean> {
	await run(
		sql,
		`INSERT INTO lease (name, holder, until_ms) VALUES (?, ?, ${NOW_MS} + ?)
		 ON DUPLICATE KEY UPDATE
			holder = IF(until_ms < ${NOW_MS}, VALUES(holder), holder),
			until_ms = IF(holder = VALUES(holder), VALUES(until_ms), until_ms)`,
		[name, holder, LEASE_MS]
	);
	return (await holderOf(sql, name)) === holder;
}

export async function holderOf(sql: Sql, name: string): Promise<string | null> {
	const rows = await select<{ holder: string }>(sql, 'SELECT holder FROM lease WHERE name = ?', [
		name
	]);
	return rows[0]?.holder ?? null;
}

/** Takes a lease over from a holder that is known to be gone. */
export async function takeOver(
	sql: Sql,
	name: string,
	from: string,
	holder: string
): Promise<void> {
	await run(
		sql,
		`UPDATE lease SET holder = ?, until_ms = ${NOW_MS} + ? WHERE name = ? AND holder = ?`,
		[holder, LEASE_MS, name, from]
	);
}

/**
 * First in a batch's transaction: who has the lease. The shared lock makes a copy that would take over
 * wait for this transaction's end, so two pipelines never write at once.
 */
export const fenceSql = (name: 'pipeline'): string =>
	`SELECT holder FROM lease WHERE name = '${name}' LOCK IN SHARE MODE`;

/** At a clean stop: the next copy need not wait. */
export async function release(sql: Sql, name: string, holder: string): Promise<void> {
	await run(sql, 'UPDATE lease SET until_ms = 0 WHERE name = ? AND holder = ?', [name, holder]);
}
