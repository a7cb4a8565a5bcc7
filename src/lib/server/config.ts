import { resolve } from 'node:path';
import { z } from 'zod';

const text = z.string().trim().min(1);
const optional = text.nullable().default(null);
const port = (fallback: number) =>
	z.coerce.number('must be a port number').int().min(0).max(65_535).default(fallback);
const urlOf = (...schemes: string[]) =>
	text.refine((value) => schemes.some((scheme) => value.startsWith(`${scheme}://`)), {
		message: `must begin with ${schemes.map((scheme) => `${scheme}://`).join(' or ')}`
	});
const onOff = (fallback: 'on' | 'off') =>
	z
		.enum(['on', 'off'], 'must be on or off')
		.default(fallback)
		.transform((value) => value === 'on');
const secret = z.string().min(32, 'must have at least 32 characters');

/** Every variable of the environment (api.md, 'Environment'); the last group is set by the launcher. */
const ENVIRONMENT = z.object({
	PORT: port(5180),
	HOST: text.default('127.0.0.1'),
	ORIGIN: urlOf('http', 'https').nullable().default(null),
	TLS_CERT: optional,
	TLS_KEY: optional,
	ADDRESS_HEADER: optional,
	XFF_DEPTH: z.coerce.number('must be a number').int().min(1).default(1),
	PROTOCOL_HEADER: optional,
	HOST_HEADER: optional,
	DATABASE_URL: urlOf('mysql', 'mariadb').nullable().default(null),
	MQTT_URL: urlOf('mqtt', 'mqtts').nullable().default(null),
	MQTT_HOST: text.default('127.0.0.1'),
	MQTT_PORT: port(1883),
	MQTT_TLS_PORT: port(0),
	MQTT_TLS_CERT: optional,
	MQTT_TLS_KEY: optional,
	MQTT_RATE: z.coerce.number('must be a number of messages a second').positive().default(200),
	SMTP_URL: urlOf('smtp', 'smtps').nullable().default(null),
	MAIL_FROM: optional,
	LODEKEEP_DATA: text.default('.data'),
	LODEKEEP_SECRET: secret.nullable().default(null),
	LODEKEEP_SECRET_PREVIOUS: secret.nullable().default(null),
	LODEKEEP_METRICS_TOKEN: optional,
	LODEKEEP_WEBHOOK_PRIVATE: onOff('off'),
	LODEKEEP_ADMIN_EMAIL: z.email('must be an e-mail address').nullable().default(null),
	LODEKEEP_ADMIN_PASSWORD: z
		.string()
		.min(12, 'must have at least 12 characters')
		.nullable()
		.default(null),
	LODEKEEP_DEMO: onOff('on'),
	LOG_LEVEL: z
		.enum(
			['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent'],
			'must be fatal, error, warn, info, debug, trace or silent'
		)
		.default('info'),
	LODEKEEP_LINK_SECRET: optional,
	LODEKEEP_MAIL_PORT: port(0)
});

type Environment = z.infer<typeof ENVIRONMENT>;

/** A file of a certificate and that of its key. */
export interface TlsFiles {
	certFile: string;
	keyFile: string;
}

export interface Config {
	port: number;
	host: string;
	/** What browsers call this installation; null = as the request says. */
	origin: string | null;
	tls: TlsFiles | null;
	proxy: {
		addressHeader: string | null;
		xffDepth: number;
		protocolHeader: string | null;
		hostHeader: string | null;
	};
	/** null = the embedded database (the launcher sets it for the app). */
	databaseUrl: string | null;
	/** null = the embedded broker. */
	mqttUrl: string | null;
	mqtt: {
		host: string;
		port: number;
		/** null = no TLS listener. */
		tls: (TlsFiles & { port: number }) | null;
		/** Messages a second a node, held by backpressure. */
		ratePerS: number;
	};
	/** null = the local mail catcher on `mailCatcherPort`. */
	smtpUrl: string | null;
	mailFrom: string;
	/** 0 = none runs. */
	mailCatcherPort: number;
	/** Absolute path. */
	dataDir: string;
	/** null = the launcher makes one once in `dataDir`. */
	secret: string | null;
	secretPrevious: string | null;
	metricsToken: string | null;
	webhookPrivate: boolean;
	admin: { email: string | null; password: string | null };
	demo: boolean;
	logLevel: Environment['LOG_LEVEL'];
	/** Shared by app and broker for the link between them; null without the launcher. */
	linkSecret: string | null;
}

export type ConfigResult = { ok: true; config: Config } | { ok: false; problems: string[] };

/** Reads and checks the environment. Each problem is a sentence that names its variable. */
export function readConfig(env: Record<string, string | undefined>): ConfigResult {
	// An empty variable is one that is not set: that is how files and containers leave one out.
	const set = Object.entries(env).filter(([, value]) => value !== undefined && value !== '');
	const parsed = ENVIRONMENT.safeParse(Object.fromEntries(set));
	if (!parsed.success) return { ok: false, problems: parsed.error.issues.map(sentence) };
	const problems = together(parsed.data);
	return problems.length > 0 ? { ok: false, problems } : { ok: true, config: shape(parsed.data) };
}

/** For a process that cannot go on without: throws one error that holds every sentence. */
export function requireConfig(env: Record<string, string | undefined> = process.env): Config {
	const result = readConfig(env);
	if (!result.ok) throw new Error(result.problems.join('\n'));
	return result.config;
}

function sentence(issue: { path: PropertyKey[]; message: string }): string {
	const message = issue.message.startsWith('must')
		? issue.message
		: `is not right: ${issue.message}`;
	return `${String(issue.path[0])} ${message}.`;
}

/** What no single variable can tell. */
function together(env: Environment): string[] {
	const problems: string[] = [];
	if ((env.TLS_CERT === null) !== (env.TLS_KEY === null))
		problems.push('TLS_CERT and TLS_KEY must be given together.');
	const mqttTls = [env.MQTT_TLS_PORT !== 0, env.MQTT_TLS_CERT !== null, env.MQTT_TLS_KEY !== null];
	if (new Set(mqttTls).size > 1)
		problems.push('MQTT_TLS_PORT, MQTT_TLS_CERT and MQTT_TLS_KEY must be given together.');
	if (env.SMTP_URL !== null && env.MAIL_FROM === null)
		problems.push('MAIL_FROM must be given with SMTP_URL: it is the sender of every mail.');
	if (env.LODEKEEP_ADMIN_PASSWORD !== null && env.LODEKEEP_ADMIN_EMAIL === null)
		problems.push('LODEKEEP_ADMIN_EMAIL must be given with LODEKEEP_ADMIN_PASSWORD.');
	return problems;
}

const pair = (certFile: string | null, keyFile: string | null): TlsFiles | null =>
	certFile === null || keyFile === null ? null : { certFile, keyFile };

function shape(env: Environment): Config {
	const mqttTls = pair(env.MQTT_TLS_CERT, env.MQTT_TLS_KEY);
	return {
		port: env.PORT,
		host: env.HOST,
		origin: env.ORIGIN,
		tls: pair(env.TLS_CERT, env.TLS_KEY),
		proxy: {
			addressHeader: env.ADDRESS_HEADER,
			xffDepth: env.XFF_DEPTH,
			protocolHeader: env.PROTOCOL_HEADER,
			hostHeader: env.HOST_HEADER
		},
		databaseUrl: env.DATABASE_URL?.replace(/^mariadb:/, 'mysql:') ?? null,
		mqttUrl: env.MQTT_URL,
		mqtt: {
			host: env.MQTT_HOST,
			port: env.MQTT_PORT,
			tls: mqttTls === null ? null : { ...mqttTls, port: env.MQTT_TLS_PORT },
			ratePerS: env.MQTT_RATE
		},
		smtpUrl: env.SMTP_URL,
		mailFrom: env.MAIL_FROM ?? 'Lodekeep <lodekeep@localhost>',
		mailCatcherPort: env.LODEKEEP_MAIL_PORT,
		dataDir: resolve(env.LODEKEEP_DATA),
		secret: env.LODEKEEP_SECRET,
		secretPrevious: env.LODEKEEP_SECRET_PREVIOUS,
		metricsToken: env.LODEKEEP_METRICS_TOKEN,
		webhookPrivate: env.LODEKEEP_WEBHOOK_PRIVATE,
		admin: { email: env.LODEKEEP_ADMIN_EMAIL, password: env.LODEKEEP_ADMIN_PASSWORD },
		demo: env.LODEKEEP_DEMO,
		logLevel: env.LOG_LEVEL,
		linkSecret: env.LODEKEEP_LINK_SECRET
	};
}
