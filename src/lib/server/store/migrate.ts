import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { createConnection, type Connection, type RowDataPacket } from 'mysql2/promise';
import { CONNECTION_OPTIONS, SESSION_SQL } from './connect';

/** One statement of one migration file. */
export interface Step {
	/** The file's name without extension: '0000_first'. */
	migration: string;
	step: number;
	sql: string;
}

export type MigrateResult = { ok: true; stepsRun: number } | { ok: false; reason: string };

export interface MigrateOptions {
	/** The folder that drizzle-kit writes. */
	folder?: string;
	/** Called before and after each statement; a test ends the process here. */
	onStep?: (step: Step, when: 'before' | 'unrecorded' | 'after') => void | Promise<void>;
	/** How long to wait for another migrator, s. */
	lockWaitS?: number;
}

interface Journal {
	entries: { idx: number; tag: string }[];
}

interface Recorded extends RowDataPacket {
	migration: string;
	step: number;
	hash: string;
	done: number;
}

const LOCK = 'lodekeep migrate ';

const STEP_TABLE = `CREATE TABLE IF NOT EXISTS migration_step (
	migration VARCHAR(120) NOT NULL,
	step INT NOT NULL,
	hash CHAR(64) CHARACTER SET ascii NOT NULL,
	begun_at_ms BIGINT NOT NULL,
	done_at_ms BIGINT,
	PRIMARY KEY (migration, step)
)`;

/**
 * What a statement that had already taken effect says when it runs again: table, column, key or
 * constraint is there (1050, 1060, 1061, 1826, 1005 with errno 121, 1022), or what it drops is
 * gone (1051, 1091, 1146). Forgiven only for a step recorded as begun: MariaDB's DDL is atomic
 * since 10.6, so such a step either did all of it or nothing.
 */
const ALREADY_DONE = new Set([1050, 1051, 1060, 1061, 1022, 1091, 1146, 1826]);

const isData = (sql: string) => /^\s*(INSERT|UPDATE|DELETE)\b/i.test(sql);

const hashOf = (sql: string) => createHash('sha256').update(sql).digest('hex');

/** All steps in order, as the journal of drizzle-kit lists them. */
export async function readSteps(folder = 'drizzle'): Promise<Step[]> {
	const journal = JSON.parse(
		await readFile(join(folder, 'meta', '_journal.json'), 'utf8')
	) as Journal;
	const steps: Step[] = [];
	for (const { tag } of journal.entries) {
		const text = await readFile(join(folder, `${tag}.sql`), 'utf8');
		const statements = text.split('--> statement-breakpoint').map((sql) => sql.trim());
		statements
			.filter((sql) => sql !== '')
			.forEach((sql, step) => steps.push({ migration: tag, step, sql }));
	}
	return steps;
}

/**
 * Brings the database to the newest layout. One migrator at a time: the lock belongs to the
 * connection that also runs the statements, so it ends with its holder. A killed run is finished
 * by the next one.
 */
export async function migrate(url: string, options: MigrateOptions = {}): Promise<MigrateResult> {
	const steps = await readSteps(options.folder);
	const connection = await createConnection({ uri: url, ...CONNECTION_OPTIONS });
	try {
		await connection.query(SESSION_SQL);
		// A holder whose machine vanished without a word loses the lock after a minute of silence.
		await connection.query('SET SESSION wait_timeout = 60');
		if (!(await lock(connection, options.lockWaitS ?? 30)))
			return { ok: false, reason: 'Another process is changing the database just now.' };
		return await runSteps(connection, steps, options);
	} finally {
		// Ends the lock too; end() would wait for a server that is gone.
		connection.destroy();
	}
}

async function lock(connection: Connection, waitS: number): Promise<boolean> {
	const [rows] = await connection.query<RowDataPacket[]>(
		'SELECT GET_LOCK(CONCAT(?, DATABASE()), ?) AS got',
		[LOCK, waitS]
	);
	return rows[0]?.['got'] === 1;
}

async function runSteps(
	connection: Connection,
	steps: Step[],
	options: MigrateOptions
): Promise<MigrateResult> {
	const recorded = await readRecorded(connection);
	const refusal = refuse(steps, recorded);
	if (refusal !== null) return { ok: false, reason: refusal };
	let stepsRun = 0;
	for (const step of steps) {
		const before = recorded.get(keyOf(step));
		if (before?.done === 1) continue;
		await options.onStep?.(step, 'before');
		await runStep(connection, step, before !== undefined, options);
		await options.onStep?.(step, 'after');
		stepsRun += 1;
	}
	return { ok: true, stepsRun };
}

const keyOf = (step: { migration: string; step: number }) => `${step.migration}#${step.step}`;

async function readRecorded(connection: Connection): Promise<Map<string, Recorded>> {
	await connection.query('ALTER DATABASE CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin');
	await connection.query(STEP_TABLE);
	const [rows] = await connection.query<Recorded[]>(
		'SELECT migration, step, hash, done_at_ms IS NOT NULL AS done FROM migration_step ORDER BY migration, step'
	);
	return new Map(rows.map((row) => [keyOf(row), row]));
}

/** Why this program must not touch this database, or null. */
function refuse(steps: Step[], recorded: Map<string, Recorded>): string | null {
	const known = new Map(steps.map((step) => [keyOf(step), step]));
	for (const [key, row] of recorded) {
		const step = known.get(key);
		if (step === undefined)
			return `The database was made by a newer Lodekeep (it has change ${row.migration}, which this one does not know). Start the newer version.`;
		if (hashOf(step.sql) !== row.hash)
			return `Change ${row.migration}, step ${row.step + 1}, was altered after it had been made in this database. Restore the file drizzle/${row.migration}.sql.`;
	}
	return null;
}

async function runStep(
	connection: Connection,
	step: Step,
	begunBefore: boolean,
	options: MigrateOptions
): Promise<void> {
	if (!begunBefore)
		await connection.query(
			'INSERT INTO migration_step (migration, step, hash, begun_at_ms) VALUES (?, ?, ?, ?)',
			[step.migration, step.step, hashOf(step.sql), Date.now()]
		);
	const data = isData(step.sql);
	// A change of rows and its record are one transaction; a change of layout commits by itself.
	if (data) await connection.query('START TRANSACTION');
	await runStatement(connection, step, begunBefore && !data);
	await options.onStep?.(step, 'unrecorded');
	await connection.query(
		'UPDATE migration_step SET done_at_ms = ? WHERE migration = ? AND step = ?',
		[Date.now(), step.migration, step.step]
	);
	if (data) await connection.query('COMMIT');
}

async function runStatement(connection: Connection, step: Step, forgiving: boolean): Promise<void> {
	try {
		await connection.query(step.sql);
	} catch (error) {
		if (forgiving && isAlreadyDone(error)) return;
		throw new Error(`Database change ${step.migration}, step ${step.step + 1}, failed.`, {
			cause: error
		});
	}
}

function isAlreadyDone(error: unknown): boolean {
	const { errno, message } = error as { errno?: number; message?: string };
	if (errno === 1005) return message?.includes('errno: 121') ?? false;
	return errno !== undefined && ALREADY_DONE.has(errno);
}
