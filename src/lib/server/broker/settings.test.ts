import { expect, test } from 'vitest';
import { readSettings } from './settings';

const LODEKEEP_LINK_SECRET = 'a link secret of a test';
const sentences = (env: NodeJS.ProcessEnv) => {
	const result = readSettings({ LODEKEEP_LINK_SECRET, ...env });
	return result.ok ? [] : result.sentences;
};

test('without settings the broker listens on loopback, port 1883, 200 messages a second a node', () => {
	// api.md, 'Environment'.
	expect(readSettings({ LODEKEEP_LINK_SECRET })).toEqual({
		ok: true,
		config: {
			host: '127.0.0.1',
			port: 1883,
			tls: null,
			ratePerS: 200,
			linkSecret: LODEKEEP_LINK_SECRET
		}
	});
});

test('an empty setting is none', () => {
	expect(readSettings({ LODEKEEP_LINK_SECRET, MQTT_TLS_PORT: '', MQTT_PORT: '' })).toMatchObject({
		config: { port: 1883, tls: null }
	});
});

test.each<[NodeJS.ProcessEnv, RegExp]>([
	[{ MQTT_PORT: 'abc' }, /^MQTT_PORT: /],
	[{ MQTT_PORT: '65536' }, /^MQTT_PORT: /],
	[{ MQTT_RATE: '0' }, /^MQTT_RATE: /],
	[{ LODEKEEP_LINK_SECRET: 'too short' }, /^LODEKEEP_LINK_SECRET: /],
	[{ MQTT_TLS_PORT: '8883' }, /^MQTT_TLS_PORT: needs MQTT_TLS_CERT and MQTT_TLS_KEY/],
	[
		{ MQTT_TLS_PORT: '8883', MQTT_TLS_CERT: '/nowhere.pem', MQTT_TLS_KEY: '/nowhere.pem' },
		/^MQTT_TLS_CERT: the file \/nowhere\.pem can't be read/
	]
])('what cannot work is said in one sentence without any secret: %o', (env, sentence) => {
	const said = sentences(env);
	expect(said).toHaveLength(1);
	expect(said[0]).toMatch(sentence);
	expect(said[0]).not.toContain('too short');
});
