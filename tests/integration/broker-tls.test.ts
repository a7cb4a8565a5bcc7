import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { connect } from 'node:net';
import { once } from 'node:events';
import { afterEach, expect, test } from 'vitest';
import { start } from '$lib/server/broker/start';
import { Bench, drain, LINK_SECRET, nodeKeys, until } from '../support/broker';
import { MqttNode } from '../support/mqtt-node';

const bench = new Bench();
afterEach(async () => await bench.end());

/** A self-signed certificate for 127.0.0.1, made for this run only. */
function selfSigned(): { cert: string; key: string } {
	const dir = mkdtempSync(join(tmpdir(), 'lodekeep-tls-'));
	const [certFile, keyFile] = [join(dir, 'cert.pem'), join(dir, 'key.pem')];
	const words = 'req -x509 -newkey ec -pkeyopt ec_paramgen_curve:prime256v1 -nodes -days 1';
	execFileSync(
		'openssl',
		`${words} -subj /CN=broker -addext subjectAltName=IP:127.0.0.1 -keyout ${keyFile} -out ${certFile}`.split(
			' '
		),
		{ stdio: 'ignore' }
	);
	const pair = { cert: readFileSync(certFile, 'utf8'), key: readFileSync(keyFile, 'utf8') };
	rmSync(dir, { recursive: true });
	return pair;
}

test('over TLS a node signs in, is answered after the receipt and hears its command', async () => {
	const keys = nodeKeys(1);
	const pair = selfSigned();
	const broker = await bench.broker({ tls: { port: 0, ...pair } });
	const subscriber = await bench.subscriber(broker.port, keys);
	const seen = drain(subscriber);
	const node = await MqttNode.connect(broker.tlsPort!, keys[0]!, {
		protocol: 'mqtts',
		ca: pair.cert
	});
	bench.ending(node, async (n) => await n.end());
	await node.listen();
	await Promise.all(Array.from({ length: 500 }, async (_, i) => await node.publish(`m${i}`)));
	expect(seen).toHaveLength(500);
	await subscriber.publishDown(node.serial, Buffer.from('do'));
	await until(() => node.commands.length === 1);
});

test('plain bytes on the TLS port are cut off and do no harm', async () => {
	const broker = await bench.broker({ tls: { port: 0, ...selfSigned() } });
	const socket = connect({ host: '127.0.0.1', port: broker.tlsPort! });
	socket.on('error', () => undefined);
	socket.write('GET / HTTP/1.1\r\n\r\n');
	await once(socket, 'close');
	await until(() => broker.stats().refusedTotal.malformed === 1);
});

test('a certificate that does not read, and a taken port, stop the start with a reason', async () => {
	const config = { host: '127.0.0.1', port: 0, ratePerS: 200, linkSecret: LINK_SECRET };
	await expect(
		start({ ...config, tls: { port: 0, cert: 'nonsense', key: 'nonsense' } })
	).rejects.toThrow(/PEM/);
	const broker = await bench.broker();
	await expect(start({ ...config, port: broker.port, tls: null })).rejects.toThrow(/EADDRINUSE/);
});
