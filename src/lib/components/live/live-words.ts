import { duration } from '$lib/format/duration';
import { words } from '$lib/format/messages';
import { clockTime } from '$lib/format/time';

/** GET /api/v1/sites/{site}/live */
export interface SiteLive {
	status: 'live' | 'late' | 'lost';
	asOf: string;
	lateSince: string | null;
	nodesHeard: number;
	nodesExpected: number;
}
export interface Connection {
	signedOut: boolean;
	/** When Lodekeep last answered this page. */
	answeredAtMs: number | null;
}

/** Polls come every 2 s: three missed ones are no hiccup any more. */
export const NO_ANSWER_MS = 8_000;

/** What the title block says of freshness: struck when what is shown may be old. */
export function liveText(
	live: SiteLive | null,
	connection: Connection,
	timezone: string,
	nowMs: number
): { struck: boolean; text: string } {
	const { answeredAtMs } = connection;
	const said = words().live;
	if (connection.signedOut) return { struck: true, text: said.signedOut };
	if (answeredAtMs !== null && nowMs - answeredAtMs > NO_ANSWER_MS)
		return {
			struck: true,
			text: said.noAnswer(clockTime(answeredAtMs, timezone), duration(nowMs - answeredAtMs))
		};
	if (live === null) return { struck: false, text: said.asking };
	const heard = said.heard(live.nodesHeard, live.nodesExpected);
	if (live.status === 'live') return { struck: false, text: said.live(heard) };
	const sinceMs = Date.parse(live.lateSince ?? live.asOf);
	return {
		struck: true,
		text: said[live.status](clockTime(sinceMs, timezone), duration(nowMs - sinceMs), heard)
	};
}
