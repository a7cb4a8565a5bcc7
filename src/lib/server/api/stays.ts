import { z } from 'zod';
import type { StayView } from '$lib/schemas/v1/feed';
import * as changes from '$lib/server/store/queries/changes';
import type { SiteRow } from '$lib/server/store/queries/sites';
import * as queries from '$lib/server/store/queries/stays';
import { snapshot } from '$lib/server/store/transaction';
import { ok, type Answer } from './answer';
import { badCursor } from './bays';
import { decodeCursor, encodeCursor } from './cursor';
import type { Instance } from './instance';
import { isProblem, problem, type Problem } from './problem';
import { rfc3339, rfc3339OrNull } from './time';

export interface Stay {
	bayId: number;
	bay: string;
	fromMs: number;
	toMs: number | null;
	end: 'departure' | 'unknown' | null;
}

/** Runs of 'occupied' in one bay's effective history, oldest first; a run still going has no end. */
export function staysOf(points: readonly queries.HistoryPoint[]): Stay[] {
	const stays: Stay[] = [];
	let open: Stay | null = null;
	for (const { bayId, bay, atMs, state } of points) {
		if (state === 'occupied') {
			open ??= { bayId, bay, fromMs: atMs, toMs: null, end: null };
		} else if (open !== null) {
			stays.push({ ...open, toMs: atMs, end: state === 'vacant' ? 'departure' : 'unknown' });
			open = null;
		}
	}
	if (open !== null) stays.push(open);
	return stays;
}

const overlaps = (s: Stay, fromMs: number, toMs: number): boolean =>
	s.fromMs < toMs && (s.toMs === null || s.toMs > fromMs);

const cursorShape = z.strictObject({ bay: z.int(), from: z.int() });
/** Bays whose history is read in one go. */
const BAYS_AT_ONCE = 50;
const DAY_MS = 86_400_000;
const DEFAULT_DAYS = 7;
const LONGEST_RANGE_MS = 366 * DAY_MS;

/** Without `from` a week of whole UTC days, so that the same question has the same answer all day. */
function rangeOf(q: StayQuery): { fromMs: number; toMs: number } | Problem {
	const endMs = q.to ?? q.nowMs;
	const fromMs = q.from ?? (Math.floor(endMs / DAY_MS) - DEFAULT_DAYS) * DAY_MS;
	if (fromMs >= endMs) return problem(400, 'Query: from must lie before to.');
	if (endMs - fromMs > LONGEST_RANGE_MS) return problem(422, 'At most a year at a time.');
	return { fromMs, toMs: q.to ?? Number.MAX_SAFE_INTEGER };
}

export interface StayQuery {
	site: SiteRow;
	personal: boolean;
	nowMs: number;
	bay: string | undefined;
	from: number | undefined;
	to: number | undefined;
	limit: number;
	cursor: string | undefined;
}

/** Stays that touch [from, to), by bay and time; the last seven days when nothing is said. */
export async function listStays(app: Instance, q: StayQuery): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? { bay: 0, from: 0 } : decodeCursor(cursorShape, q.cursor);
	if (at === null) return badCursor();
	const range = rangeOf(q);
	if (isProblem(range)) return range;
	const { fromMs, toMs } = range;
	const { personal, nowMs } = q;
	const f = { siteId: q.site.id, bay: q.bay ?? null, fromMs, toMs, personal, nowMs };
	return await snapshot(app.store, async (tx) => {
		const newest = await changes.cursor(tx.sql, q.site.id);
		const found: Stay[] = [];
		let fromBay = at.bay;
		while (found.length <= q.limit) {
			const bays = await queries.bays(tx.sql, f, fromBay, BAYS_AT_ONCE);
			for (const bay of bays) {
				const stays = staysOf(await queries.points(tx.sql, bay, f));
				found.push(
					...stays.filter(
						(s) => overlaps(s, fromMs, toMs) && (bay.id > at.bay || s.fromMs > at.from)
					)
				);
				if (found.length > q.limit) break;
			}
			if (bays.length < BAYS_AT_ONCE) break;
			fromBay = (bays.at(-1)?.id ?? fromBay) + 1;
		}
		const shown = found.slice(0, q.limit);
		const last = shown.at(-1);
		const more = found.length > q.limit && last !== undefined;
		const next = more ? encodeCursor({ bay: last.bayId, from: last.fromMs }) : null;
		return ok({ items: shown.map(stayView), next }, { changeId: newest });
	});
}

const stayView = (s: Stay): StayView => ({
	bay: s.bay,
	from: rfc3339(s.fromMs),
	to: rfc3339OrNull(s.toMs),
	end: s.end
});
