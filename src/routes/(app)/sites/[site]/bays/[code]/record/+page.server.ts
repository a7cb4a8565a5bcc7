import { ask } from '$lib/components/live/ask';
import type { BayDetail, EventItem } from '$lib/components/node/types';
import { instantOf, localInput } from '$lib/format/time';
import type { PageServerLoad } from './$types';

const DAY_MS = 86_400_000;
const MOST_EVENTS = 1000;

interface Stay {
	bay: string;
	from: string;
	to: string | null;
	end: string | null;
}

/** One bay, one period: what was said at the time beside what is known now. */
export const load: PageServerLoad = async ({ params, fetch, url, parent }) => {
	const { site } = await parent();
	const nowMs = Date.now();
	const at = (name: string, presetMs: number) => {
		const wall = url.searchParams.get(name);
		return (wall === null ? null : instantOf(wall, site.timezone)) ?? presetMs;
	};
	const toMs = at('to', nowMs);
	const fromMs = Math.min(at('from', toMs - 7 * DAY_MS), toMs - 60_000);
	const base = `/api/v1/sites/${params.site}`;
	const range = `from=${new Date(fromMs).toISOString()}&to=${new Date(toMs).toISOString()}&bay=${encodeURIComponent(params.code)}`;
	const [bay, events, stays] = await Promise.all([
		ask<BayDetail>(`${base}/bays/${encodeURIComponent(params.code)}`, {}, fetch),
		ask<{ items: EventItem[]; next: string | null }>(
			`${base}/events?${range}&limit=${MOST_EVENTS}`,
			{},
			fetch
		),
		ask<{ items: Stay[]; next: string | null }>(
			`${base}/stays?${range}&limit=${MOST_EVENTS}`,
			{},
			fetch
		)
	]);
	return {
		bay: bay.body,
		events: events.body.items,
		stays: stays.body.items,
		cut: events.body.next !== null || stays.body.next !== null,
		fromMs,
		toMs,
		fromWall: localInput(fromMs, site.timezone),
		toWall: localInput(toMs, site.timezone),
		nowMs
	};
};
