import { readSettings } from '$lib/server/broker/settings';
import { start } from '$lib/server/broker/start';

/** The broker as a process: settings from the environment, one JSON line with its ports when ready. */
function fail(sentence: string): never {
	process.stderr.write(`${sentence}\n`);
	process.exit(1);
}

const settings = readSettings(process.env);
if (!settings.ok) fail(settings.sentences.join('\n'));
const broker = await start(settings.config).catch((error: NodeJS.ErrnoException) =>
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
