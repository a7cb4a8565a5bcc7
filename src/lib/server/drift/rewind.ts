import { unpackMemory } from '$lib/drift/codec';
import * as state from '$lib/server/store/queries/drift-state';
import type { Closing, ClosingSite } from './close-hour';
import { settingsAt } from './site-nodes';
import { flagged } from './take-hour';

/**
 * Takes a site back to the turn of a day before an hour, or to its very beginning: what comes after is closed
 * anew like any other hour. One transaction; a stop in between loses nothing. Returns from where it goes on.
 */
export async function rewindSite(
	{ sql, transactions }: Closing,
	site: ClosingSite,
	toHourMs: number,
	clearMarksToMs: number
): Promise<number> {
	const { siteId, rule } = site;
	const snapshotMs = await state.snapshotBefore(sql, siteId, toHourMs);
	const toMs = snapshotMs ?? Math.min(toHourMs, site.fromMs);
	const kept = snapshotMs === null ? [] : await state.snapshotMemories(sql, siteId, snapshotMs);
	const settings = await settingsAt(sql, siteId, toMs);
	const rows = kept.map(({ nodeId, placedAtMs, memory }) =>
		flagged(
			unpackMemory(memory),
			memory,
			{ nodeId, placedAtMs },
			{ siteId, rule, settings: settings.of(nodeId) },
			toMs
		)
	);
	await transactions.run(async ({ later }) => {
		await state.forget(later, siteId, toMs);
		await state.writeMemories(later, rows);
		const fromMs = Math.min(site.fromMs, toMs);
		await state.writeSite(later, { siteId, fromMs, closedToMs: toMs });
		await state.clearMarks(later, siteId, clearMarksToMs);
	});
	return toMs;
}
