import { drizzle, type MySql2Database } from 'drizzle-orm/mysql2';
import { createConnection, createPool, type Connection, type Pool } from 'mysql2/promise';
import * as schema from './schema';

export type Database = MySql2Database<typeof schema>;

export interface Store {
	/** Typed queries. */
	readonly db: Database;
	/** The same connections, for the pipeline's own statements and for what drizzle cannot say. */
	readonly pool: Pool;
	/**
	 * A connection of its own that takes several statements at once: the pipeline's transaction then needs
	 * two or three journeys instead of twenty. For statements made of our own text and escaped values only.
	 */
	batchConnection(): Promise<Connection>;
	close(): Promise<void>;
}

/** What every session is set to; STRICT_ALL_TABLES makes the server refuse what it cannot store. */
export const SESSION_SQL = [
	"SET SESSION sql_mode = 'STRICT_ALL_TABLES,NO_ZERO_DATE,NO_ZERO_IN_DATE,ERROR_FOR_DIVISION_BY_ZERO,NO_ENGINE_SUBSTITUTION,ONLY_FULL_GROUP_BY'",
	"time_zone = '+00:00'",
	'innodb_lock_wait_timeout = 10'
].join(', ');

/** A 64-bit value beyond 2^53 comes as text, all others as numbers; times are UTC. */
export const CONNECTION_OPTIONS = {
	charset: 'utf8mb4',
	timezone: 'Z',
	supportBigNumbers: true,
	bigNumberStrings: false,
	connectTimeout: 5_000,
	enableKeepAlive: true,
	multipleStatements: false
} as const;

/** Opens nothing until the first query, so that a database that is down does not stop a start. */
export function connect(url: string, options: { connections?: number } = {}): Store {
	const pool = createPool({
		uri: url,
		...CONNECTION_OPTIONS,
		connectionLimit: options.connections ?? 10,
		// Above this many waiting queries something is wrong: refuse instead of filling the memory.
		queueLimit: 10_000
	});
	pool.pool.on('connection', (connection) => {
		// Queued on the new connection before anything its borrower sends.
		connection.query(SESSION_SQL, (error) => {
			if (error !== null) connection.destroy();
		});
	});
	return {
		db: drizzle({ client: pool, schema, mode: 'default' }),
		pool,
		batchConnection: async () => {
			const connection = await createConnection({
				uri: url,
				...CONNECTION_OPTIONS,
				multipleStatements: true
			});
			// A connection that dies says so to its next query; without a listener it would end the process.
			connection.on('error', () => undefined);
			await connection.query(SESSION_SQL);
			return connection;
		},
		close: async () => {
			await pool.end();
		}
	};
}
