import type { Log } from '$lib/server/log';

export interface Periodic {
	/** Runs it now, unless it is running. */
	now(): void;
	close(): Promise<void>;
}

/** Runs `work` every `everyMs`, never twice at once; a failure is logged once a minute and tried again. */
export function periodic(
	name: string,
	everyMs: number,
	log: Log,
	work: () => Promise<unknown>
): Periodic {
	let closed = false;
	let timer: NodeJS.Timeout | null = null;
	let running: Promise<void> | null = null;
	let again = false;
	let loggedAtMs = 0;

	async function run(): Promise<void> {
		try {
			await work();
		} catch (error) {
			if (closed || Date.now() - loggedAtMs < 60_000) return;
			loggedAtMs = Date.now();
			log.warn({ work: name, message: (error as Error).message }, 'tried again later');
		}
	}
	function start(): void {
		if (closed) return;
		if (timer !== null) clearTimeout(timer);
		running = run().then(() => {
			running = null;
			const soon = again;
			again = false;
			if (!closed) timer = setTimeout(start, soon ? 0 : everyMs);
		});
	}
	timer = setTimeout(start, everyMs);
	return {
		now: () => {
			if (running === null) start();
			else again = true;
		},
		close: async () => {
			closed = true;
			if (timer !== null) clearTimeout(timer);
			await running;
		}
	};
}
