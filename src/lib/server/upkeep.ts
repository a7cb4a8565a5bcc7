import type { Log } from './log';
import { keepHouse } from './store/retention';
import { keepVisits } from './visits/keep';

const HOUR_MS = 3_600_000;
/** After the rush of a start. */
const FIRST_MS = 60_000;
/** How long an end waits for the statement under way. */
const CLOSE_MS = 2_000;

export interface Upkeep {
	close(): Promise<void>;
}

export interface UpkeepParts {
	databaseUrl: string;
	/** Where the files of photos lie. */
	dataDir: string;
}

/** Makes the partitions to come and lets go of what nobody keeps, every hour. */
export function start(parts: UpkeepParts, log: Log): Upkeep {
	let working: Promise<void> = Promise.resolve();
	let timer: NodeJS.Timeout;
	const plan = (afterMs: number) => {
		timer = setTimeout(() => {
			working = work(parts, log);
			void working.then(() => {
				plan(HOUR_MS);
			});
		}, afterMs);
		timer.unref();
	};
	plan(FIRST_MS);
	return {
		close: async () => {
			clearTimeout(timer);
			// Housekeeping can be cut off anywhere: each of its statements stands by itself.
			await Promise.race([working, new Promise((resolve) => setTimeout(resolve, CLOSE_MS))]);
			clearTimeout(timer);
		}
	};
}

async function work({ databaseUrl, dataDir }: UpkeepParts, log: Log): Promise<void> {
	try {
		const report = await keepHouse(databaseUrl, Date.now());
		if (report === null) return;
		const { partitionsMade, partitionsDropped, rowsDeleted } = report;
		if (partitionsMade > 0 || partitionsDropped.length > 0 || rowsDeleted > 0)
			log.info(report, 'kept house');
		const visits = await keepVisits(databaseUrl, dataDir, Date.now());
		if (visits.namesDropped > 0 || visits.photosDropped > 0 || visits.orphans > 0)
			log.info(visits, 'let go of names and photos of visits');
	} catch (error) {
		// The partitions reach 30 days ahead: there is time to try again and to be seen in the log.
		log.error({ err: error }, 'housekeeping did not succeed; it is tried again in an hour');
	}
}
