import { open, stat } from 'node:fs/promises';
import type { Database } from '../lib/server/store/connect';
import { demoMade } from './demo';
import * as firstStart from '../lib/server/store/queries/first-start';

interface Telling {
	db: Database;
	/** The simulator's log, and where this start's part of it begins. */
	logFile: string;
	fromByte: number;
	isStopping: () => boolean;
	say: (text: string) => void;
}

/** Follows the demo's making; a person may sign in meanwhile and watch the week come in. */
export async function tellOfDemo(telling: Telling): Promise<void> {
	const { say, isStopping } = telling;
	say('making a site with a week of history (about a minute)');
	const slug = await adoptDemo(telling.db, isStopping);
	if (slug === null) return;
	say(`site ${slug} is there; its week is coming in`);
	const sent = await untilWeekSent(telling.logFile, telling.fromByte, isStopping);
	if (sent !== null) say(`the week is there: ${sent}`);
}

const LOOK_MS = 1_000;

/** Waits for the site that the simulator makes, and makes it the demo's. Null when told to stop. */
async function adoptDemo(db: Database, isStopping: () => boolean): Promise<string | null> {
	while (!isStopping()) {
		const slug = await adoptIfThere(db).catch(() => null);
		if (slug !== null) return slug;
		await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
	}
	return null;
}

/** The site may not be there yet, or the database may be away for a moment. */
async function adoptIfThere(db: Database): Promise<string | null> {
	const [slug] = (await firstStart.siteIds(db)).keys();
	if (slug === undefined) return null;
	if (!(await firstStart.adoptDemoSite(db, slug, Date.now()))) return null;
	await demoMade(db);
	return slug;
}

/** The simulator's own line when its week has been taken; null when told to stop. */
const WEEK_SENT = /history sent: (.+?);/;
const TAIL_BYTES = 4_000;

/** Waits for the end of the week in the simulator's log, from `fromByte` on. */
async function untilWeekSent(
	logFile: string,
	fromByte: number,
	isStopping: () => boolean
): Promise<string | null> {
	while (!isStopping()) {
		const said = await tail(logFile, fromByte).catch(() => '');
		const found = WEEK_SENT.exec(said)?.[1];
		if (found !== undefined) return found;
		await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
	}
	return null;
}

export const sizeOf = async (file: string): Promise<number> =>
	await stat(file).then(
		({ size }) => size,
		() => 0
	);

async function tail(file: string, fromByte: number): Promise<string> {
	const length = Math.min(TAIL_BYTES, (await sizeOf(file)) - fromByte);
	if (length <= 0) return '';
	const handle = await open(file);
	try {
		const position = (await sizeOf(file)) - length;
		const { buffer, bytesRead } = await handle.read(Buffer.alloc(length), 0, length, position);
		return buffer.subarray(0, bytesRead).toString();
	} finally {
		await handle.close();
	}
}
