import { DRIFT_PARAMS } from '$lib/drift/params';
import { PARAMS } from '$lib/detection/params';
import { median } from '$lib/numeric/quantile';
import { theilSen } from '$lib/numeric/theil-sen';
import type { NoticeFacts } from '$lib/schemas/notices';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as queries from '$lib/server/store/queries/notice-drift';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
/** Method 5: the rate is taken over 14 days, and needs 5. */
const RATE_DAYS = 14;
const LEAST_DAYS = 5;
/** Beyond this nobody plans by it. */
const FAR_DAYS = 60;

type Hours = readonly { atMs: number; valueMg: number }[];

/** Limits of unexplained drift: where the film is due, and where a free bay would read as taken. */
export const LIMITS_MG = {
	drifting: DRIFT_PARAMS.driftingMg.defaultValue,
	due: DRIFT_PARAMS.refreshMg.defaultValue,
	states: PARAMS.onMg.defaultValue
};

/**
 * Length, rate and days left to the next limit (film refresh due, then the occupancy threshold) by
 * Theil–Sen with Sen's 95 % limits over daily medians. Rounded, so that a notice changes when a figure does.
 */
export function driftFactsOf(hours: Hours): NoticeFacts {
	const last = hours.slice(-6);
	if (last.length === 0) return {};
	const nowMg = median(last.map(({ valueMg }) => valueMg));
	const facts: NoticeFacts = { unexplainedMg: Math.round(nowMg) };
	const days = new Map<number, number[]>();
	for (const { atMs, valueMg } of hours) {
		const day = Math.floor(atMs / DAY_MS);
		days.set(day, [...(days.get(day) ?? []), valueMg]);
	}
	if (days.size < LEAST_DAYS) return facts;
	const line = theilSen(
		[...days.keys()],
		[...days.values()].map((values) => median(values))
	);
	if (line === null || line.low <= 0) return facts;
	const limitMg = nowMg < LIMITS_MG.due ? LIMITS_MG.due : LIMITS_MG.states;
	const left = Math.max(0, limitMg - nowMg);
	const [soonest, latest] = [left / line.high, left / line.low];
	return {
		...facts,
		rateMgPerDay: Math.round(line.slope * 10) / 10,
		...(soonest > FAR_DAYS
			? {}
			: {
					daysLeftLo: Math.floor(soonest),
					...(latest > FAR_DAYS ? {} : { daysLeftHi: Math.ceil(latest) })
				})
	};
}

/** What is known of drifting nodes, worked out anew once an hour a node: hours are closed hourly. */
export class DriftFacts {
	readonly #known = new Map<number, { hour: number; facts: NoticeFacts }>();

	async of(sql: Sql, nodeIds: readonly number[], nowMs: number): Promise<Map<number, NoticeFacts>> {
		// Hours are closed some minutes after they end.
		const hour = Math.floor((nowMs - HOUR_MS / 4) / HOUR_MS);
		const stale = nodeIds.filter((id) => this.#known.get(id)?.hour !== hour);
		const hours = await queries.unexplained(sql, stale, nowMs - RATE_DAYS * DAY_MS);
		for (const id of stale) this.#known.set(id, { hour, facts: driftFactsOf(hours.get(id) ?? []) });
		return new Map(nodeIds.map((id) => [id, this.#known.get(id)?.facts ?? {}]));
	}
}
