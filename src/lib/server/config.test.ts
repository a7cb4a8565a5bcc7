import { resolve } from 'node:path';
import { expect, test } from 'vitest';
import { readConfig, requireConfig } from './config';

const problemsOf = (env: Record<string, string>) => {
	const result = readConfig(env);
	return result.ok ? [] : result.problems;
};

test('without a single variable the defaults of api.md, Environment, hold', () => {
	expect(requireConfig({})).toMatchObject({
		port: 5180,
		host: '127.0.0.1',
		origin: null,
		databaseUrl: null,
		mqttUrl: null,
		mqtt: { host: '127.0.0.1', port: 1883, tls: null, ratePerS: 200 },
		dataDir: resolve('.data'),
		demo: true,
		secret: null
	});
});

test('an empty variable is one that is not set', () => {
	expect(requireConfig({ PORT: '', DATABASE_URL: '' })).toMatchObject({
		port: 5180,
		databaseUrl: null
	});
});

test.each([
	[{ PORT: 'x' }, 'PORT must be a port number.'],
	[{ PORT: '70000' }, 'PORT '],
	[{ DATABASE_URL: 'postgres://x' }, 'DATABASE_URL must begin with mysql:// or mariadb://.'],
	[{ MQTT_URL: 'http://x' }, 'MQTT_URL must begin with mqtt:// or mqtts://.'],
	[{ ORIGIN: 'x.example' }, 'ORIGIN must begin with http:// or https://.'],
	[{ MQTT_RATE: '0' }, 'MQTT_RATE '],
	[{ LODEKEEP_SECRET: 'short' }, 'LODEKEEP_SECRET must have at least 32 characters.'],
	[{ LODEKEEP_DEMO: 'maybe' }, 'LODEKEEP_DEMO must be on or off.'],
	[{ LOG_LEVEL: 'loud' }, 'LOG_LEVEL must be fatal'],
	[{ LODEKEEP_ADMIN_EMAIL: 'x' }, 'LODEKEEP_ADMIN_EMAIL must be an e-mail address.'],
	[{ TLS_CERT: 'a.pem' }, 'TLS_CERT and TLS_KEY must be given together.'],
	[{ MQTT_TLS_PORT: '8883' }, 'MQTT_TLS_PORT, MQTT_TLS_CERT and MQTT_TLS_KEY must be given'],
	[{ SMTP_URL: 'smtp://x' }, 'MAIL_FROM must be given with SMTP_URL'],
	[{ LODEKEEP_ADMIN_PASSWORD: 'long enough 12' }, 'LODEKEEP_ADMIN_EMAIL must be given with']
])('%o is refused with a sentence that names the variable', (env, sentence) => {
	const problems = problemsOf(env);
	expect(problems).toHaveLength(1);
	expect(problems[0]).toContain(sentence);
	expect(problems[0]).toMatch(/\.$/);
});

test('every bad variable is named at once', () => {
	expect(problemsOf({ PORT: 'x', LOG_LEVEL: 'x' })).toHaveLength(2);
});

test('a value is never repeated in a sentence: it may be a secret', () => {
	const text = problemsOf({ LODEKEEP_SECRET: 'hunter2', DATABASE_URL: 'x://u:hunter2@h' }).join();
	expect(text).not.toContain('hunter2');
});

test('mariadb:// means the same as mysql://', () => {
	expect(requireConfig({ DATABASE_URL: 'mariadb://u:p@h:1/d' }).databaseUrl).toBe(
		'mysql://u:p@h:1/d'
	);
});
