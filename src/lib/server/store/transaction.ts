import { drizzle } from 'drizzle-orm/mysql2';
import type { PoolConnection } from 'mysql2/promise';
import type { Database, Store } from './connect';
import * as schema from './schema';

/** One connection inside a transaction, for typed queries and for the pipeline's own kind. */
export interface Tx {
	readonly db: Database;
	readonly sql: PoolConnection;
}

async function onConnection<T>(
	store: Store,
	begin: readonly string[],
	work: (tx: Tx) => Promise<T>,
	keep: (value: T) => boolean
): Promise<T> {
	const sql = await store.pool.getConnection();
	let usable = false;
	try {
		for (const statement of begin) await sql.query(statement);
		const value = await work({ db: drizzle({ client: sql, schema, mode: 'default' }), sql });
		await sql.query(keep(value) ? 'COMMIT' : 'ROLLBACK');
		usable = true;
		return value;
	} catch (error) {
		usable = await sql.query('ROLLBACK').then(
			() => true,
			() => false
		);
		throw error;
	} finally {
		if (usable) sql.release();
		else sql.destroy();
	}
}

/** Commits when `keep` says so of what `work` gave, else rolls back; an error rolls back. */
export async function transaction<T>(
	store: Store,
	work: (tx: Tx) => Promise<T>,
	keep: (value: T) => boolean = () => true
): Promise<T> {
	return await onConnection(store, ['START TRANSACTION'], work, keep);
}

/** Everything read inside is of one moment. */
export async function snapshot<T>(store: Store, work: (tx: Tx) => Promise<T>): Promise<T> {
	return await onConnection(
		store,
		[
			'SET TRANSACTION ISOLATION LEVEL REPEATABLE READ',
			'START TRANSACTION WITH CONSISTENT SNAPSHOT, READ ONLY'
		],
		work,
		() => true
	);
}
