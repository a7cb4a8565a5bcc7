import { inService } from './node-entry';
import type { Pipeline } from './pipeline';
import { allotAndWrite, type SiteNews } from './steps/feed';

/** A site none of whose nodes is heard for this long has fallen silent as a whole. */
const QUIET_MS = 90_000;
const QUIET_PERIODS = 3;

/**
 * Writes a change of kind 'site' when a site as a whole falls silent or is heard again, so that its
 * readers and webhooks look at `live` (api.md, `lodekeep.site.live`).
 */
export class SiteWatch {
	readonly #quiet = new Map<number, boolean>();

	async look(pipeline: Pipeline, nowMs: number): Promise<void> {
		const changed = this.#changed(pipeline, nowMs);
		if (changed.length === 0) return;
		const news = new Map<number, SiteNews>(
			changed.map((siteId) => [
				siteId,
				{ events: [], shown: [], other: [{ kind: 'site', bayId: null, nodeId: null }] }
			])
		);
		await pipeline.exclusive(async () => {
			await pipeline.room.transactions.run(async (sql) => {
				await allotAndWrite(sql, news, nowMs);
			});
		});
	}

	#changed({ room }: Pipeline, nowMs: number): number[] {
		const newest = new Map<number, { heardMs: number; periodS: number }>();
		for (const entry of room.registry.all()) {
			if (!inService(entry)) continue;
			const { siteId, periodS } = entry.config;
			const known = newest.get(siteId) ?? { heardMs: 0, periodS };
			newest.set(siteId, {
				heardMs: Math.max(known.heardMs, entry.live.heardAtMs ?? 0),
				periodS: Math.min(known.periodS, periodS)
			});
		}
		const changed: number[] = [];
		for (const [siteId, { heardMs, periodS }] of newest) {
			const allowedMs = Math.max(QUIET_MS, QUIET_PERIODS * periodS * 1000);
			const quiet = nowMs - heardMs > allowedMs;
			const before = this.#quiet.get(siteId);
			this.#quiet.set(siteId, quiet);
			if (before !== undefined && before !== quiet) changed.push(siteId);
		}
		return changed;
	}
}
