import { spawn } from 'node:child_process';
import { createConnection, type RowDataPacket } from 'mysql2/promise';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { migrate, readSteps, type Step } from '$lib/server/store/migrate';
import { startDatabase, type TestDatabase } from '../support/database';

let server: TestDatabase;
/** Migrated in one go, as a measure for the others. */
let undisturbed: string;

beforeAll(async () => {
	server = await startDatabase({ empty: true });
	undisturbed = await fresh('undisturbed');
	expect(await migrate(undisturbed)).toMatchObject({ ok: true });
});

afterAll(async () => {
	await server.close();
});

/** An empty database of its own on the same server. */
async function fresh(name: string): Promise<string> {
	const connection = await createConnection({ uri: server.url });
	await connection.query(`CREATE DATABASE lodekeep_${name}`);
	await connection.end();
	return server.url.replace(/\/lodekeep$/, `/lodekeep_${name}`);
}

async function rows(url: string, sql: string): Promise<RowDataPacket[]> {
	const connection = await createConnection({ uri: url });
	const [found] = await connection.query<RowDataPacket[]>(sql);
	await connection.end();
	return found;
}

/** Everything the server knows of the layout, with the database's own name left out. */
async function layoutOf(url: string): Promise<unknown> {
	const where = 'WHERE TABLE_SCHEMA = DATABASE()';
	return {
		columns: await rows(
			url,
			`SELECT TABLE_NAME, COLUMN_NAME, COLUMN_TYPE, IS_NULLABLE, COLUMN_DEFAULT, EXTRA, COLLATION_NAME
			 FROM information_schema.COLUMNS ${where} ORDER BY TABLE_NAME, ORDINAL_POSITION`
		),
		keys: await rows(
			url,
			`SELECT TABLE_NAME, INDEX_NAME, SEQ_IN_INDEX, COLUMN_NAME, NON_UNIQUE
			 FROM information_schema.STATISTICS ${where} ORDER BY TABLE_NAME, INDEX_NAME, SEQ_IN_INDEX`
		),
		links: await rows(
			url,
			`SELECT TABLE_NAME, CONSTRAINT_NAME, REFERENCED_TABLE_NAME
			 FROM information_schema.REFERENTIAL_CONSTRAINTS
			 WHERE CONSTRAINT_SCHEMA = DATABASE() ORDER BY TABLE_NAME, CONSTRAINT_NAME`
		),
		steps: await rows(url, 'SELECT migration, step, hash FROM migration_step ORDER BY 1, 2')
	};
}

const keyOf = ({ migration, step }: Step) => `${migration}#${step}`;

/** Ends the migrator at a step as a kill would: its connection, transaction and lock go with it. */
async function dieAt(url: string, key: string, moment: 'unrecorded' | 'after'): Promise<void> {
	const onStep = (step: Step, when: string) => {
		if (keyOf(step) === key && when === moment) throw new Error('killed');
	};
	await expect(migrate(url, { onStep })).rejects.toThrow('killed');
}

test('a migration that dies in and after every step is finished by the next one', async () => {
	const disturbed = await fresh('disturbed');
	for (const step of await readSteps()) {
		await dieAt(disturbed, keyOf(step), 'unrecorded');
		await dieAt(disturbed, keyOf(step), 'after');
	}
	expect(await migrate(disturbed)).toEqual({ ok: true, stepsRun: 0 });
	expect(await layoutOf(disturbed)).toEqual(await layoutOf(undisturbed));
});

test('a second run changes nothing', async () => {
	expect(await migrate(undisturbed)).toEqual({ ok: true, stepsRun: 0 });
});

test('two migrators at once: one does the work, the other finds it done', async () => {
	const url = await fresh('race');
	const steps = await readSteps();
	const results = await Promise.all([migrate(url), migrate(url)]);
	const run = results.map((result) => (result.ok ? result.stepsRun : -1)).sort((a, b) => a - b);
	expect(run).toEqual([0, steps.length]);
});

test('a migrator process killed by SIGKILL in mid-file leaves no lock behind', async () => {
	const url = await fresh('sigkill');
	const steps = await readSteps();
	const victim = keyOf(steps[40]!);
	const program = `
		import { migrate } from './src/lib/server/store/migrate';
		await migrate(process.env.VICTIM_URL, { onStep: (step, when) => {
			if (step.migration + '#' + step.step === '${victim}' && when === 'unrecorded')
				process.kill(process.pid, 'SIGKILL');
		} });`;
	const child = spawn(process.execPath, ['--import', 'tsx', '--input-type=module', '-e', program], {
		env: { ...process.env, VICTIM_URL: url },
		stdio: 'ignore'
	});
	const signal = await new Promise((resolve) => child.once('exit', (_code, by) => resolve(by)));
	expect(signal).toBe('SIGKILL');
	expect(await migrate(url, { lockWaitS: 2 })).toEqual({ ok: true, stepsRun: steps.length - 40 });
});

test('a database server killed in mid-migration is brought to the same layout', async () => {
	const url = await fresh('server_killed');
	const steps = await readSteps();
	const victim = keyOf(steps[60]!);
	const onStep = async (step: Step, when: string) => {
		if (keyOf(step) === victim && when === 'unrecorded') await server.kill();
	};
	await expect(migrate(url, { onStep })).rejects.toThrow();
	await server.start();
	expect(await migrate(url)).toEqual({ ok: true, stepsRun: steps.length - 60 });
	expect(await layoutOf(url)).toEqual(await layoutOf(undisturbed));
});

test('a database made by a newer version is left alone, with a sentence', async () => {
	const future = "('9999_from_the_future', 0, REPEAT('a', 64), 1, 1)";
	await rows(undisturbed, `INSERT INTO migration_step VALUES ${future}`);
	const result = await migrate(undisturbed);
	await rows(undisturbed, "DELETE FROM migration_step WHERE migration = '9999_from_the_future'");
	expect(result).toMatchObject({ ok: false });
	expect(result.ok ? '' : result.reason).toContain('newer Lodekeep');
});

test('a migration file altered after it ran is refused by name', async () => {
	const alter = (hash: string) =>
		`UPDATE migration_step SET hash = ${hash} WHERE migration = '0000_first' AND step = 3`;
	await rows(undisturbed, alter('REVERSE(hash)'));
	const result = await migrate(undisturbed);
	await rows(undisturbed, alter('REVERSE(hash)'));
	expect(result.ok ? '' : result.reason).toContain('0000_first, step 4, was altered');
});
