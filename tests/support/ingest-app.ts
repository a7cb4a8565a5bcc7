import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { pino } from 'pino';
import { createSecret } from '$lib/server/secret';
import { connect } from '$lib/server/store/connect';
import { startSupervisor } from '$lib/server/supervisor';
import { SECRET } from './ingest-fixed';

/**
 * The ingest of the app as a process of its own, to be killed: DATABASE_URL, MQTT_PORT and
 * LODEKEEP_LINK_SECRET in the environment; one JSON line when it runs. EVERY_MS makes the periodic
 * work quick, PORT_FILE names a file that holds the broker's port.
 */
const env = process.env;
const everyMs = Number(env['EVERY_MS'] ?? 0);
const store = connect(env['DATABASE_URL'] ?? '');
const port =
	env['PORT_FILE'] === undefined ? env['MQTT_PORT'] : readFileSync(env['PORT_FILE'], 'utf8');
const supervisor = startSupervisor({
	config: {
		mqttUrl: null,
		mqtt: { host: '127.0.0.1', port: Number(port), tls: null, ratePerS: 1_000_000 },
		linkSecret: env['LODEKEEP_LINK_SECRET'] ?? null,
		dataDir: resolve('.tmp')
	},
	store,
	secret: createSecret(SECRET),
	log: pino({ level: env['TEST_LOG'] ?? 'warn' }, pino.destination(2)),
	...(everyMs === 0
		? {}
		: {
				every: {
					directoryMs: everyMs,
					hearingMs: everyMs,
					commandsMs: everyMs,
					replayMs: everyMs,
					habitsMs: everyMs
				}
			})
});
const waiting = setInterval(() => {
	if (supervisor.status().state !== 'running') return;
	clearInterval(waiting);
	process.stdout.write('{"ready":true}\n');
}, 20);
process.on('SIGUSR2', () => {
	process.stdout.write(`${JSON.stringify(supervisor.status())}\n`);
});
for (const signal of ['SIGTERM', 'SIGINT'] as const)
	process.once(signal, () => {
		clearInterval(waiting);
		void supervisor
			.close()
			.then(async () => await store.close())
			.then(() => process.exit(0));
	});
