import type { Child } from './processes';

/** A process that is started again when it ends by itself. */
export interface Part {
	readonly name: string;
	readonly pid: number;
	stop(): Promise<void>;
}

export interface SuperviseOptions {
	name: string;
	start: () => Promise<Child>;
	/** After each start: its id is written down so that the next launcher can end it. */
	onStarted: (child: Child) => Promise<void>;
	say: (text: string) => void;
	/** Asked when it ended by itself: false = it is not wanted any more and stays down. */
	isWanted?: () => Promise<boolean>;
	/** It ended again and again: the whole product stops. */
	onHopeless: (reason: string) => void;
	/** Where a person finds why. */
	logFile: string;
}

/** A run shorter than this counts as failed, ms. */
const SHORT_RUN_MS = 60_000;
const MOST_FAILURES = 8;
const LONGEST_PAUSE_MS = 30_000;

export const pauseMs = (failures: number) => Math.min(500 * 2 ** failures, LONGEST_PAUSE_MS);

export async function supervise(options: SuperviseOptions): Promise<Part> {
	let child = await options.start();
	let stopping = false;
	let wake: () => void = () => undefined;
	await options.onStarted(child);

	const watching = (async () => {
		let failures = 0;
		for (;;) {
			const beganMs = performance.now();
			await child.ended;
			if (stopping) return;
			if (!((await options.isWanted?.().catch(() => true)) ?? true)) return;
			failures = performance.now() - beganMs > SHORT_RUN_MS ? 0 : failures + 1;
			if (failures > MOST_FAILURES) {
				options.onHopeless(`${options.name} ends as soon as it starts (see ${options.logFile})`);
				return;
			}
			options.say(`ended by itself; starting it again (see ${options.logFile})`);
			await new Promise<void>((resolve) => {
				wake = resolve;
				setTimeout(resolve, pauseMs(failures));
			});
			if (stopping) return;
			child = await restart(options, child);
		}
	})();

	return {
		name: options.name,
		get pid() {
			return child.pid;
		},
		stop: async () => {
			stopping = true;
			wake();
			await child.stop();
			await watching;
			// A start that was under way when the stop came.
			await child.stop();
		}
	};
}

/** A start that fails counts like a run that ended at once. */
async function restart(options: SuperviseOptions, former: Child): Promise<Child> {
	try {
		const child = await options.start();
		await options.onStarted(child);
		options.say('is up again');
		return child;
	} catch (error) {
		options.say(`did not start: ${error instanceof Error ? error.message : String(error)}`);
		return { ...former, ended: Promise.resolve(), stop: async () => undefined };
	}
}
