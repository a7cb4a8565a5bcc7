import type { Sql } from '$lib/server/store/queries/bulk';
import * as notices from '$lib/server/store/queries/notices';
import type { Healed } from './reconcile';

/** What comes back within this is the same trouble. */
export const REOPEN_MS = 86_400_000;

/** By subject, the last notice of a site (null: of the installation) that closed by itself within a day. */
export async function healedLately(
	sql: Sql,
	siteId: number | null,
	nowMs: number
): Promise<Map<string, Healed>> {
	const rows = await notices.closedByItself(sql, siteId, nowMs - REOPEN_MS);
	return new Map(rows.map(({ about, ...healed }) => [about, healed]));
}
