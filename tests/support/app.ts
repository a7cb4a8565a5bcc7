import { spawn, type ChildProcess } from 'node:child_process';
import { createServer, type AddressInfo } from 'node:net';
import { join, resolve } from 'node:path';
import { buildWhenStale } from '../../src/launch/build';
import { http, type Answer, type Wanted } from './http';
import { SEED_PASSWORD } from './seed';

const ROOT = resolve(import.meta.dirname, '../..');
const READY_MS = 60_000;

/** Sealed values of a test database are under this. */
export const TEST_SECRET = 'a secret of the tests, of no other use';

export interface TestApp {
	readonly origin: string;
	readonly pid: number;
	/** Everything that the app has printed. */
	output(): string;
	/** A path of the app, raw. */
	readonly ask: (path: string, wanted?: Wanted) => Promise<Answer>;
	/** The same with `Authorization: Bearer`. */
	withKey(key: string): (path: string, wanted?: Wanted) => Promise<Answer>;
	/** Signs in over the form of /sign-in; what comes back asks with cookie and Origin of a browser. */
	signIn(
		email: string,
		password?: string
	): Promise<(path: string, wanted?: Wanted) => Promise<Answer>>;
	/** SIGTERM, and waits for the end. */
	stop(): Promise<number | null>;
	kill(): Promise<void>;
}

export async function freePort(): Promise<number> {
	return await new Promise((done, fail) => {
		const server = createServer();
		server.on('error', fail);
		server.listen(0, '127.0.0.1', () => {
			const { port } = server.address() as AddressInfo;
			server.close(() => {
				done(port);
			});
		});
	});
}

export interface AppOptions {
	databaseUrl: string;
	env?: Record<string, string>;
}

/**
 * The app as a process of its own against a database, on a free port: the built app (built anew when
 * the sources have changed); with LODEKEEP_TEST_DEV=1 vite's dev server, which starts sooner; with
 * LODEKEEP_TEST_BUILD a build that lies elsewhere, as it is.
 */
export async function startApp(o: AppOptions): Promise<TestApp> {
	const dev = process.env['LODEKEEP_TEST_DEV'] === '1';
	const elsewhere = process.env['LODEKEEP_TEST_BUILD'];
	if (!dev && elsewhere === undefined) await buildWhenStale(() => undefined);
	const port = await freePort();
	const origin = `http://127.0.0.1:${port}`;
	const vite = join(ROOT, 'node_modules', 'vite', 'bin', 'vite.js');
	const args = dev
		? [vite, 'dev', '--host', '127.0.0.1', '--port', String(port), '--strictPort']
		: [join(elsewhere ?? join(ROOT, 'build'), 'index.js')];
	const child = spawn(process.execPath, args, {
		cwd: ROOT,
		stdio: ['ignore', 'pipe', 'pipe'],
		env: {
			PATH: process.env['PATH'] ?? '',
			HOME: process.env['HOME'] ?? '',
			NODE_ENV: dev ? 'development' : 'production',
			HOST: '127.0.0.1',
			PORT: String(port),
			ORIGIN: origin,
			DATABASE_URL: o.databaseUrl,
			LODEKEEP_SECRET: TEST_SECRET,
			LODEKEEP_DATA: join(ROOT, '.tmp', `app-${port}`),
			BODY_SIZE_LIMIT: '20M',
			LOG_LEVEL: 'debug',
			SHUTDOWN_TIMEOUT: '5',
			// No broker unless a test brings one: the pipeline still takes acts.
			MQTT_URL: 'mqtt://127.0.0.1:9',
			...o.env
		}
	});
	const app = handleOf(child, origin);
	await untilAlive(child, app);
	return app;
}

function handleOf(child: ChildProcess, origin: string): TestApp {
	let said = '';
	for (const stream of [child.stdout, child.stderr]) {
		stream?.on('data', (chunk: Buffer) => (said += chunk.toString()));
	}
	const ended = new Promise<number | null>((done) => child.once('exit', done));
	const ask = async (path: string, wanted?: Wanted) => await http(origin + path, wanted);
	return {
		origin,
		pid: child.pid ?? 0,
		output: () => said,
		ask,
		withKey: (key) => async (path, wanted) =>
			await ask(path, {
				...wanted,
				headers: { authorization: `Bearer ${key}`, ...wanted?.headers }
			}),
		signIn: async (email, password = SEED_PASSWORD) => await signIn(ask, origin, email, password),
		stop: async () => {
			child.kill('SIGTERM');
			return await ended;
		},
		kill: async () => {
			child.kill('SIGKILL');
			await ended;
		}
	};
}

async function signIn(ask: TestApp['ask'], origin: string, email: string, password: string) {
	const answer = await ask('/sign-in', {
		method: 'POST',
		headers: { origin, accept: 'text/html', 'content-type': 'application/x-www-form-urlencoded' },
		body: new URLSearchParams({ email, password }).toString()
	});
	const cookie = Object.entries(answer.cookies)
		.map(([name, value]) => `${name}=${value}`)
		.join('; ');
	if (answer.status !== 303 || cookie === '') {
		throw new Error(`${email} could not sign in: ${answer.status} ${answer.text.slice(0, 200)}`);
	}
	return async (path: string, wanted?: Wanted) =>
		await ask(path, { ...wanted, headers: { cookie, origin, ...wanted?.headers } });
}

async function untilAlive(child: ChildProcess, app: TestApp): Promise<void> {
	const endMs = Date.now() + READY_MS;
	while (Date.now() < endMs) {
		if (child.exitCode !== null) throw new Error(`the app ended: ${app.output()}`);
		const alive = await app.ask('/healthz').catch(() => null);
		if (alive?.status === 200) return;
		await new Promise((go) => setTimeout(go, 50));
	}
	await app.kill();
	throw new Error(`the app did not start: ${app.output()}`);
}
