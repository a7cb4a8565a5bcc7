import { readFileSync } from 'node:fs';
import { z } from 'zod';
import type { BrokerConfig } from './start';

const port = z.coerce.number().int().min(0).max(65_535);
const environment = z
	.object({
		MQTT_HOST: z.string().min(1).default('127.0.0.1'),
		MQTT_PORT: port.default(1883),
		MQTT_TLS_PORT: port.optional(),
		MQTT_TLS_CERT: z.string().optional(),
		MQTT_TLS_KEY: z.string().optional(),
		MQTT_RATE: z.coerce.number().min(1).default(200),
		LODEKEEP_LINK_SECRET: z.string().min(16)
	})
	.refine(
		(env) =>
			env.MQTT_TLS_PORT === undefined ||
			(env.MQTT_TLS_CERT !== undefined && env.MQTT_TLS_KEY !== undefined),
		{ path: ['MQTT_TLS_PORT'], message: 'needs MQTT_TLS_CERT and MQTT_TLS_KEY (PEM files)' }
	);

export type Settings = { ok: true; config: BrokerConfig } | { ok: false; sentences: string[] };

/** The broker's settings from the environment (api.md, 'Environment'); an empty one counts as not set. */
export function readSettings(variables: NodeJS.ProcessEnv): Settings {
	const given = Object.fromEntries(Object.entries(variables).filter(([, value]) => value !== ''));
	const parsed = environment.safeParse(given);
	if (!parsed.success) {
		const sentences = parsed.error.issues.map(
			({ path, message }) => `${path.join('.')}: ${message}`
		);
		return { ok: false, sentences };
	}
	const env = parsed.data;
	const config: BrokerConfig = {
		host: env.MQTT_HOST,
		port: env.MQTT_PORT,
		tls: null,
		ratePerS: env.MQTT_RATE,
		linkSecret: env.LODEKEEP_LINK_SECRET
	};
	if (env.MQTT_TLS_PORT === undefined) return { ok: true, config };
	const cert = readPem(env.MQTT_TLS_CERT);
	const key = readPem(env.MQTT_TLS_KEY);
	if (cert === null || key === null) {
		const name = cert === null ? 'MQTT_TLS_CERT' : 'MQTT_TLS_KEY';
		return { ok: false, sentences: [`${name}: the file ${env[name]} can't be read`] };
	}
	return { ok: true, config: { ...config, tls: { port: env.MQTT_TLS_PORT, cert, key } } };
}

function readPem(path = ''): string | null {
	try {
		return readFileSync(path, 'utf8');
	} catch {
		return null;
	}
}
