import { appendFileSync } from 'node:fs';
import { startSubscriber } from '$lib/server/ingest/subscriber';
import type { NodeDirectoryEntry } from '$lib/server/ingest/subscriber-types';

/**
 * An app for fault tests, to be killed or stopped: tells the directory, takes everything, and settles when
 * TAKER_SETTLES is 1. Writes the text of each message it took to TAKER_FILE before it settles.
 */
const subscriber = startSubscriber({
	kind: 'embedded',
	port: Number(process.env['TAKER_PORT']),
	linkSecret: process.env['LODEKEEP_LINK_SECRET'] ?? ''
});
const entries = JSON.parse(process.env['TAKER_DIRECTORY'] ?? '[]') as NodeDirectoryEntry[];
let ready = false;
subscriber.onConnected((connected) => {
	if (!connected) return;
	void subscriber.replaceDirectory(entries).then(() => {
		if (!ready) process.stdout.write('{"ready":true}\n');
		ready = true;
	});
});
for (;;) {
	const batch = await subscriber.take(1_000);
	const lines = batch.map(
		({ serial, bytes }) => `${serial} ${Buffer.from(bytes).toString('utf8')}\n`
	);
	appendFileSync(process.env['TAKER_FILE'] ?? '/dev/null', lines.join(''));
	if (process.env['TAKER_SETTLES'] === '1') subscriber.settle(batch);
}
