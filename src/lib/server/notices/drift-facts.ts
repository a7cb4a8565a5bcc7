import { PARAMS } from '$lib/detection/params';
import { DRIFT_PARAMS } from '$lib/drift/params';
import { median } from '$lib/numeric/quantile';
import { theilSen } from '$lib/numeric/theil-sen';
import type { DriftRow } from '$lib/schemas/desk-drift';
import type { NoticeFacts } from '$lib/schemas/notices';
import { rowView } from '$lib/server/drift/row-view';
import { settingsAt } from '$lib/server/drift/site-nodes';
import type { Sql } from '$lib/server/store/queries/bulk';
import { overrides } from '$lib/server/store/queries/drift-inputs';
import * as views from '$lib/server/store/queries/drift-view';
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

/** Days between two ages, as a notice tells them. */
function daysOf(soonest: number, latest: number | null): NoticeFacts {
	if (soonest > FAR_DAYS) return {};
	const daysLeftLo = Math.floor(soonest);
	return latest === null || latest > FAR_DAYS
		? { daysLeftLo }
		: { daysLeftLo, daysLeftHi: Math.ceil(latest) };
}

/**
 * Days until the drift reaches a limit, by Theil–Sen with Sen's 95 % limits over daily medians of its
 * length; {} where it does not surely grow.
 */
export function daysTo(limitMg: number, hours: Hours): NoticeFacts {
	const days = new Map<number, number[]>();
	for (const { atMs, valueMg } of hours) {
		const day = Math.floor(atMs / DAY_MS);
		days.set(day, [...(days.get(day) ?? []), valueMg]);
	}
	if (days.size < LEAST_DAYS) return {};
	const line = theilSen(
		[...days.keys()],
		[...days.values()].map((values) => median(values))
	);
	if (line === null || line.low <= 0) return {};
	const left = Math.max(0, limitMg - median(hours.slice(-6).map(({ valueMg }) => valueMg)));
	return daysOf(left / line.high, left / line.low);
}

const REASONS: Readonly<Record<string, string>> = {
	clipped: 'strong_field',
	over_film_limit: 'strong_field',
	inverted: 'inverted',
	unexplained: 'unexplained'
};

/**
 * What the drift board says of a node, for its notice: cause, rate, days left (to the next limit of drift,
 * and past the last of them to the field at which a free bay reads as taken). Rounded, so that a notice
 * changes when a figure does.
 */
export function driftFactsOf(
	row: DriftRow,
	limits: { driftingMg: number; refreshMg: number; statesMg: number },
	hours: Hours
): NoticeFacts {
	const { partsMg, cause, daysToLimit } = row;
	if (partsMg === null) return {};
	const reasons = [...new Set(row.refresh.reasons.map(({ reason }) => REASONS[reason] ?? reason))];
	return {
		...{
			unexplainedMg: Math.round(partsMg.unexplained),
			limitsMg: [limits.driftingMg, limits.refreshMg]
		},
		...(cause === null || cause.ordinary
			? {}
			: { cause: cause.cause, causeMg: Math.round(cause.magnitudeMg) }),
		...(reasons.length === 0 ? {} : { reasons }),
		...(row.trend && row.ratePerDayMg !== null
			? { rateMgPerDay: Math.round(row.ratePerDayMg * 10) / 10 }
			: {}),
		...(daysToLimit === null
			? row.refresh.due
				? daysTo(limits.statesMg, hours)
				: {}
			: daysOf(daysToLimit.from, daysToLimit.to))
	};
}

/** What is known of drifting nodes, worked out anew once an hour a node: hours are closed hourly. */
export class DriftFacts {
	readonly #known = new Map<number, { hour: number; facts: NoticeFacts }>();

	async of(
		sql: Sql,
		siteId: number,
		nodeIds: readonly number[],
		nowMs: number
	): Promise<Map<number, NoticeFacts>> {
		// Hours are closed some minutes after they end.
		const hour = Math.floor((nowMs - HOUR_MS / 4) / HOUR_MS);
		const stale = nodeIds.filter((id) => this.#known.get(id)?.hour !== hour);
		const fresh = await readFacts(sql, siteId, stale, nowMs);
		for (const id of stale) this.#known.set(id, { hour, facts: fresh.get(id) ?? {} });
		return new Map(nodeIds.map((id) => [id, this.#known.get(id)?.facts ?? {}]));
	}
}

async function readFacts(
	sql: Sql,
	siteId: number,
	nodeIds: readonly number[],
	nowMs: number
): Promise<Map<number, NoticeFacts>> {
	if (nodeIds.length === 0) return new Map();
	const settings = await settingsAt(sql, siteId, nowMs);
	const onMg = new Map<number | null, number>();
	for (const { nodeId, value } of await overrides(sql, siteId, ['onMg'], nowMs))
		if (Number.isFinite(Number(value))) onMg.set(nodeId, Number(value));
	const hours = await queries.unexplained(sql, nodeIds, nowMs - RATE_DAYS * DAY_MS);
	const wanted = new Set(nodeIds);
	const rows = (await views.ofSite(sql, siteId)).filter(({ nodeId }) => wanted.has(nodeId));
	return new Map(
		rows.map((row) => {
			const own = settings.of(row.nodeId);
			const limits = {
				...{ driftingMg: own.driftingMg, refreshMg: own.refreshMg },
				statesMg: onMg.get(row.nodeId) ?? onMg.get(null) ?? LIMITS_MG.states
			};
			return [row.nodeId, driftFactsOf(rowView(row, own), limits, hours.get(row.nodeId) ?? [])];
		})
	);
}
