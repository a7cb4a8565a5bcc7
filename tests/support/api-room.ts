import { makeKey, type KeyWanted } from '$lib/server/auth/make-key';
import { connect, type Store } from '$lib/server/store/connect';
import { startApp, type TestApp } from './app';
import { startDatabase, type TestDatabase } from './database';
import { seed, type Seeded } from './seed';

/** A seeded database and the app on it: what tests over HTTP need. */
export interface Room {
	database: TestDatabase;
	store: Store;
	app: TestApp;
	seeded: Seeded;
	/** A key; by default with every scope, all sites, personal bays included. */
	key(wanted?: Partial<KeyWanted>): Promise<string>;
	/** Asks with a new key of that kind. */
	asking(wanted?: Partial<KeyWanted>): Promise<ReturnType<TestApp['withKey']>>;
	close(): Promise<void>;
}

const EVERYTHING: KeyWanted = {
	name: 'test',
	scopes: ['occupancy', 'telemetry', 'provision', 'refresh', 'webhooks'],
	sites: 'all',
	personalAllowed: true
};

export async function openRoom(env: Record<string, string> = {}): Promise<Room> {
	const database = await startDatabase();
	const store = connect(database.url, { connections: 20 });
	const seeded = await seed(store.db);
	const app = await startApp({ databaseUrl: database.url, env });
	const key = async (wanted: Partial<KeyWanted> = {}) => {
		const made = await makeKey(store.db, { ...EVERYTHING, ...wanted });
		if (!made.ok) throw new Error(made.reason);
		// The app reads its directory again within half a second.
		await new Promise((go) => setTimeout(go, 550));
		return made.key;
	};
	return {
		...{ database, store, app, seeded, key },
		asking: async (wanted) => app.withKey(await key(wanted)),
		close: async () => {
			await app.stop();
			await store.close();
			await database.close();
		}
	};
}
