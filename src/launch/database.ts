import { join } from 'node:path';
import { createConnection } from 'mysql2/promise';
import { connect, type Store } from '../lib/server/store/connect';
import { migrate } from '../lib/server/store/migrate';
import { ensurePartitions } from '../lib/server/store/partitions';
import { checkSecret } from '../lib/server/secret-check';
import { createSecret } from '../lib/server/secret';
import { checkMariadbSeries, settleMariadbSeries } from './data-folder';
import { startMariadb, StartProblem, type Mariadb } from './mariadb';

/** Starts the embedded database; again on the same port and with the same password, so that the app's address stays good. */
export function embeddedDatabase(dataDir: string, onSpawn: (pid: number) => Promise<void>) {
	let known: { port: number; password: string } | null = null;
	return async (): Promise<Mariadb> => {
		const { upgrade } = await checkMariadbSeries(dataDir);
		const server = await startMariadb({ dir: join(dataDir, 'db'), onSpawn, ...known });
		known = { port: server.port, password: decodeURIComponent(new URL(server.url).password) };
		await settleMariadbSeries(dataDir, upgrade);
		return server;
	};
}

const EXTERNAL_WAIT_MS = 60_000;
const EXTERNAL_LOOK_MS = 1_000;

/** Waits for a database of somebody else's (DATABASE_URL), which may come up later than we do. */
export async function untilAnswers(
	url: string,
	isStopping: () => boolean,
	say: (text: string) => void
): Promise<void> {
	const { host } = new URL(url);
	for (let waitedMs = 0; !isStopping(); waitedMs += EXTERNAL_LOOK_MS) {
		const reason = await whyNot(url);
		if (reason === null) return;
		if (waitedMs === 0) say(`waiting for ${host} (${reason})`);
		if (waitedMs >= EXTERNAL_WAIT_MS)
			throw new StartProblem(
				`the database at ${host} does not answer: ${reason}. Check DATABASE_URL.`
			);
		await new Promise((resolve) => setTimeout(resolve, EXTERNAL_LOOK_MS));
	}
}

async function whyNot(url: string): Promise<string | null> {
	try {
		const connection = await createConnection({ uri: url, connectTimeout: 5_000 });
		connection.destroy();
		return null;
	} catch (error) {
		const { code, message } = error as NodeJS.ErrnoException;
		if (code === 'ER_ACCESS_DENIED_ERROR' || code === 'ER_BAD_DB_ERROR')
			throw new StartProblem(`the database refuses: ${message}. Check DATABASE_URL.`);
		return code ?? message;
	}
}

/** Layout, partitions and secret; refuses with a sentence. Returns the open store. */
export async function readyStore(
	url: string,
	secret: { current: string; previous: string | null },
	say: (text: string) => void
): Promise<Store> {
	const result = await migrate(url);
	if (!result.ok) throw new StartProblem(result.reason);
	if (result.stepsRun > 0) say(`made ${result.stepsRun} changes of layout`);
	await ensurePartitions(url, Date.now());
	const store = connect(url, { connections: 2 });
	const check = await checkSecret(store.db, createSecret(secret.current, secret.previous));
	if (check.ok) {
		if (check.renewed > 0) say(`sealed ${check.renewed} values anew under the new secret`);
		return store;
	}
	await store.close();
	throw new StartProblem(check.reason);
}
