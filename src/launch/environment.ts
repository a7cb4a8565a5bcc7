import type { Config } from '../lib/server/config';

/** What the launcher made and the other processes need to know. */
export interface Made {
	databaseUrl: string;
	secret: string;
	linkSecret: string;
	/** 0 = no mail catcher. */
	mailPort: number;
}

/** Where browsers reach the product when nothing else is said. */
export function addressOf(config: Config): string {
	if (config.origin !== null) return config.origin;
	const host = isEverywhere(config.host) ? '127.0.0.1' : config.host;
	const bracketed = host.includes(':') ? `[${host}]` : host;
	return `${config.tls === null ? 'http' : 'https'}://${bracketed}:${config.port}`;
}

export const isEverywhere = (host: string) => host === '0.0.0.0' || host === '::';

/** Largest body the app reads, bytes; each route has its own, smaller limit. */
const BODY_LIMIT = '20M';
/** How long the app may finish open requests, s. */
const SHUTDOWN_S = '10';

/** The environment of app and broker: what the launcher was given, and what it made. */
export function childEnvironment(config: Config, made: Made): NodeJS.ProcessEnv {
	const env: NodeJS.ProcessEnv = {
		// An empty variable is one that is not set.
		...Object.fromEntries(Object.entries(process.env).filter(([, value]) => value !== '')),
		NODE_ENV: 'production',
		PORT: String(config.port),
		HOST: config.host,
		MQTT_HOST: config.mqtt.host,
		MQTT_PORT: String(config.mqtt.port),
		DATABASE_URL: made.databaseUrl,
		LODEKEEP_DATA: config.dataDir,
		LODEKEEP_SECRET: made.secret,
		LODEKEEP_LINK_SECRET: made.linkSecret,
		LODEKEEP_MAIL_PORT: String(made.mailPort),
		BODY_SIZE_LIMIT: process.env['BODY_SIZE_LIMIT'] ?? BODY_LIMIT,
		SHUTDOWN_TIMEOUT: SHUTDOWN_S
	};
	// adapter-node takes https for granted where neither an origin nor a proxy's header is named.
	const { protocolHeader, hostHeader } = config.proxy;
	if (protocolHeader === null && hostHeader === null) env['ORIGIN'] = addressOf(config);
	return env;
}
