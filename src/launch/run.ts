import { randomBytes } from 'node:crypto';
import { readConfig } from '../lib/server/config';

/** Everything after the packages are there: reads the settings, brings the parts up, waits for the end. */
const checked = readConfig(process.env);
if (!checked.ok) {
	for (const problem of checked.problems) console.error(`Lodekeep cannot start: ${problem}`);
	process.exit(1);
}

// Loaded now: a bad setting is told at once, without reading everything first.
const { Launcher } = await import('./launcher');
const { StartProblem } = await import('./mariadb');
const launcher = new Launcher(checked.config, randomBytes(32).toString('hex'));
let stops = 0;

async function stop(code: number): Promise<never> {
	await launcher.stop();
	process.exit(code);
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const)
	process.on(signal, () => {
		stops += 1;
		if (stops === 1) void stop(0);
		else console.log('launcher   stopping already; the database needs a moment to end cleanly');
	});

launcher.onHopeless((reason) => {
	console.error(`Lodekeep stops: ${reason}.`);
	void stop(1);
});

try {
	await launcher.start();
} catch (error) {
	if (stops === 0) {
		const known = error instanceof StartProblem;
		console.error(`Lodekeep cannot start: ${known ? error.message : String(error)}`);
		if (!known && error instanceof Error) console.error(error.stack, error.cause ?? '');
		await stop(1);
	}
}
