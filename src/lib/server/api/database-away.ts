/** What mysql2 says when there is nobody to talk to, or when that somebody is going. */
const AWAY = new Set([
	'ECONNREFUSED',
	'ECONNRESET',
	'EPIPE',
	'ETIMEDOUT',
	'ENOENT',
	'ENOTFOUND',
	'EHOSTUNREACH',
	'PROTOCOL_CONNECTION_LOST',
	'ER_SERVER_SHUTDOWN',
	'ER_CON_COUNT_ERROR',
	'ER_NEW_ABORTING_CONNECTION',
	'POOL_CLOSED'
]);

/** The code or errno of a database error, also where drizzle has wrapped it. */
export function databaseError(error: unknown): { code: string; errno: number } | null {
	for (let e: unknown = error, depth = 0; e instanceof Error && depth < 4; e = e.cause, depth++) {
		const { code, errno } = e as { code?: unknown; errno?: unknown };
		if (typeof code === 'string') return { code, errno: typeof errno === 'number' ? errno : 0 };
	}
	return null;
}

export function isDatabaseAway(error: unknown): boolean {
	const found = databaseError(error);
	if (found !== null && AWAY.has(found.code)) return true;
	return error instanceof Error && /pool is closed|closed state/i.test(error.message);
}

const DUPLICATE = 1062;
export const isDuplicate = (error: unknown): boolean => databaseError(error)?.errno === DUPLICATE;

/** Deadlock, lock wait: the whole transaction may be tried again. */
export const isRetriable = (error: unknown): boolean =>
	[1213, 1205].includes(databaseError(error)?.errno ?? 0);
