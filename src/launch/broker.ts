import { readFileSync } from 'node:fs';
import { z } from 'zod';
import { start } from '$lib/server/broker/start';

/** The broker as a process: settings from the environment, one JSON line with its ports when ready. */
const port = z.coerce.number().int().min(0).max(65_535);
const environment = z
	.object({
		MQTT_HOST: z.string().min(1).default('127.0.0.1'),
		MQTT_PORT: port.default(1883),
		MQTT_TLS_PORT: port.optional(),
		MQTT_TLS_CERT: z.string().optional(),
		MQTT_TLS_KEY: z.string().optional(),
		MQTT_RATE: z.coerce.number().positive().default(200),
		LODEKEEP_LINK_SECRET: z.string().min(16)
	})
	.refine(
		(env) =>
			env.MQTT_TLS_PORT === undefined ||
			(env.MQTT_TLS_CERT !== undefined && env.MQTT_TLS_KEY !== undefined),
		{ message: 'MQTT_TLS_PORT needs MQTT_TLS_CERT and MQTT_TLS_KEY (paths of PEM files)' }
	);

function fail(sentence: string): never {
	process.stderr.write(`${sentence}\n`);
	process.exit(1);
}

function pem(name: string, path = ''): string {
	try {
		return readFileSync(path, 'utf8');
	} catch {
		return fail(`${name}: the file ${path} can't be read`);
	}
}

/** An empty setting is none: `MQTT_TLS_PORT=` must not become port 0. */
const given = Object.fromEntries(Object.entries(process.env).filter(([, value]) => value !== ''));
const parsed = environment.safeParse(given);
if (!parsed.success) {
	fail(parsed.error.issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`).join('\n'));
}
const env = parsed.data;
const tls =
	env.MQTT_TLS_PORT === undefined
		? null
		: {
				port: env.MQTT_TLS_PORT,
				cert: pem('MQTT_TLS_CERT', env.MQTT_TLS_CERT),
				key: pem('MQTT_TLS_KEY', env.MQTT_TLS_KEY)
			};
const broker = await start({
	host: env.MQTT_HOST,
	port: env.MQTT_PORT,
	tls,
	ratePerS: env.MQTT_RATE,
	linkSecret: env.LODEKEEP_LINK_SECRET
}).catch((error: NodeJS.ErrnoException) =>
	fail(
		error.code === 'EADDRINUSE'
			? `The MQTT port is taken by another program: ${error.message}`
			: `The broker could not start: ${error.message}`
	)
);
process.stdout.write(
	`${JSON.stringify({ part: 'broker', port: broker.port, tlsPort: broker.tlsPort })}\n`
);

let closing = false;
for (const signal of ['SIGTERM', 'SIGINT'] as const) {
	process.on(signal, () => {
		if (closing) return;
		closing = true;
		void broker.close().then(() => process.exit(0));
	});
}
