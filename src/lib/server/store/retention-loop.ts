/** A DELETE as `purge` takes it: the table with its condition, and the values of that. */
export type Purging = [from: string, values: number[]];

/** Mails that told of a closed notice are needed for its thread: no longer than this. */
const WISH_DAYS = 90;
const DAY_MS = 86_400_000;

const CLOSED = 'SELECT id FROM notice WHERE site_id = ? AND closed_at_ms < ?';
const ENDED = 'SELECT id FROM refresh WHERE site_id = ? AND ended_at_ms < ?';

/**
 * Closed notices, and film refreshes that have ended, are kept as long as the site's events: what is open
 * stays, however old. In the order in which rows hang on each other.
 */
export const loopOf = (siteId: number, eventsMs: number): Purging[] => [
	[`mail_wish WHERE notice_id IN (${CLOSED})`, [siteId, eventsMs]],
	[`notice_entry WHERE notice_id IN (${CLOSED})`, [siteId, eventsMs]],
	['notice WHERE site_id = ? AND closed_at_ms < ?', [siteId, eventsMs]],
	[`refresh_transition WHERE refresh_id IN (${ENDED})`, [siteId, eventsMs]],
	['refresh WHERE site_id = ? AND ended_at_ms < ?', [siteId, eventsMs]],
	[
		`refresh_bulk WHERE site_id = ? AND ended_at_ms < ? AND NOT EXISTS
			(SELECT 1 FROM refresh WHERE bulk_id = refresh_bulk.id)`,
		[siteId, eventsMs]
	]
];

/** What is mailed no more: of the installation's own notices all, of the others' the words alone. */
export function mailOf(nowMs: number): Purging[] {
	const beforeMs = nowMs - WISH_DAYS * DAY_MS;
	const closed = 'SELECT id FROM notice WHERE closed_at_ms < ?';
	const own = `${closed} AND site_id IS NULL`;
	return [
		[`mail_wish WHERE done_at_ms < ? AND notice_id IN (${closed})`, [beforeMs, beforeMs]],
		[`notice_entry WHERE notice_id IN (${own})`, [beforeMs]],
		['notice WHERE closed_at_ms < ? AND site_id IS NULL', [beforeMs]]
	];
}
