import { pino, type DestinationStream, type Logger } from 'pino';

export type Log = Logger;

/** Names under which a secret may ride along in a logged object, at its top or one level down. */
const SECRET_NAMES = [
	'password',
	'passwordHash',
	'mqttPassword',
	'secret',
	'secretPrevious',
	'linkSecret',
	'metricsToken',
	'key',
	'token',
	'authorization',
	'Authorization',
	'cookie',
	'set-cookie',
	'databaseUrl',
	'mqttUrl',
	'smtpUrl',
	'url'
];

/** One line of JSON a record on standard output; secrets are cut out by name. */
export function createLog(
	options: { level?: string; part: string },
	destination?: DestinationStream
): Log {
	const settings = {
		level: options.level ?? 'info',
		base: { part: options.part },
		redact: {
			paths: SECRET_NAMES.flatMap((name) => [`["${name}"]`, `*["${name}"]`]),
			censor: '[cut]'
		},
		timestamp: () => `,"at":"${new Date().toISOString()}"`,
		formatters: { level: (label: string) => ({ level: label }) }
	};
	return destination === undefined ? pino(settings) : pino(settings, destination);
}
