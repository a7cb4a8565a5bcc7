import { setImmediate as breathe } from 'node:timers/promises';
import { K_LOWER_LIMITS_MG, kIndex } from '$lib/drift/k-scale';
import type { DriftBoard, DriftRow } from '$lib/schemas/desk-drift';
import { rfc3339, rfc3339OrNull } from '$lib/server/api/time';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as state from '$lib/server/store/queries/drift-state';
import * as views from '$lib/server/store/queries/drift-view';
import { BoardMemo, settingsKeys } from './board-memo';
import { HOUR_MS } from './node-hours';
import { rounded, roundedVector, rowView } from './row-view';
import { settingsAt, type SiteSettings } from './site-nodes';

const BATCH_ROWS = 200;
/** Working out so many rows takes some 10 ms: then others have their turn. */
const BREATHE_ROWS = 20;
const WINDOW_MS = 3 * HOUR_MS;

/** The Drift board of one site: nodes ranked, and the site's geomagnetic line with the K scale's limits. */
export async function driftBoard(
	sql: Sql,
	site: { id: number; pairRule: DriftBoard['pairRule'] },
	lineHours: number,
	nowMs: number
): Promise<DriftBoard> {
	const settings = await settingsAt(sql, site.id, nowMs);
	const rows = await rowsOf(sql, site.id, settings);
	const closed = await state.siteOf(sql, site.id);
	const toMs = closed?.closedToMs ?? nowMs;
	const line = await state.lines(sql, site.id, toMs - lineHours * HOUR_MS, toMs);
	const { driftingMg, refreshMg, refreshHours } = settings.site;
	return {
		pairRule: site.pairRule,
		limits: { driftingMg, refreshMg, refreshHours },
		closedTo: rfc3339OrNull(closed?.closedToMs ?? null),
		headingsEntered: rows.some(({ arrow }) => arrow !== null && arrow.bearingDeg !== null),
		rows: rows.sort(byNeed),
		line: {
			points: line.map((point) => ({
				at: rfc3339(point.hourMs),
				verdict: point.verdict,
				changeMg: point.verdict === 'known' ? roundedVector(point.changeMg) : null,
				spreadMg: point.spreadMg === null ? null : rounded(point.spreadMg),
				nodes: point.nodes
			})),
			kRanges: kRanges(line),
			kLimitsMg: [...K_LOWER_LIMITS_MG]
		}
	};
}

const memo = new BoardMemo();

/** All rows of the site; only those are worked out of which anything has changed since they were last asked for. */
async function rowsOf(sql: Sql, siteId: number, settings: SiteSettings): Promise<DriftRow[]> {
	const keyOf = settingsKeys(settings.site);
	const rows = await views.markedOfSite(sql, siteId);
	const made = rows.map((row) => memo.rowOf(row, keyOf(settings.of(row.nodeId))));
	const missing = rows.flatMap((row, i) => (made[i] === null ? [{ row, i }] : []));
	for (let at = 0; at < missing.length; at += BATCH_ROWS) {
		const batch = missing.slice(at, at + BATCH_ROWS);
		const ids = batch.flatMap(({ row }) => (row.memoryMark === null ? [] : [row.nodeId]));
		const memories = await views.memoriesOf(sql, ids);
		for (const [k, { row, i }] of batch.entries()) {
			if (k % BREATHE_ROWS === 0) await breathe();
			const own = settings.of(row.nodeId);
			const view = rowView({ ...row, memory: memories.get(row.nodeId) ?? null }, own);
			memo.keep(row, keyOf(own), view);
			made[i] = view;
		}
	}
	return made.filter((row) => row !== null);
}

/** Works a site's rows out ahead, after its hour was closed: whoever opens the board then does not wait for them. */
export async function prepareBoard(sql: Sql, siteId: number, nowMs: number): Promise<void> {
	await rowsOf(sql, siteId, await settingsAt(sql, siteId, nowMs));
}

const urgency = (row: DriftRow): number =>
	(row.refresh.due ? 4 : 0) + (row.drifting !== null ? 2 : 0) + (row.visit.length > 0 ? 1 : 0);

function byNeed(a: DriftRow, b: DriftRow): number {
	if (urgency(a) !== urgency(b)) return urgency(b) - urgency(a);
	const [sureA, sureB] = [a.sureMg ?? -1, b.sureMg ?? -1];
	return sureA === sureB ? a.bay.localeCompare(b.bay) : sureB - sureA;
}

/**
 * 3-hour ranges of UTC of the more disturbed horizontal component (check-values 8a). Hourly values miss what
 * comes and goes within an hour: K is at least this. Windows of which an hour is not known are left out.
 */
export function kRanges(line: readonly state.LineRow[]): DriftBoard['line']['kRanges'] {
	const windows = new Map<number, state.LineRow[]>();
	for (const point of line.filter(({ verdict }) => verdict === 'known')) {
		const fromMs = Math.floor(point.hourMs / WINDOW_MS) * WINDOW_MS;
		windows.set(fromMs, [...(windows.get(fromMs) ?? []), point]);
	}
	const range = (points: readonly state.LineRow[], axis: 0 | 1) => {
		const values = points.map(({ changeMg }) => changeMg[axis]);
		return Math.max(...values) - Math.min(...values);
	};
	return [...windows]
		.filter(([, points]) => points.length === WINDOW_MS / HOUR_MS)
		.map(([fromMs, points]) => {
			const rangeMg = rounded(Math.max(range(points, 0), range(points, 1)));
			return {
				...{ from: rfc3339(fromMs), to: rfc3339(fromMs + WINDOW_MS) },
				...{ rangeMg, k: kIndex(rangeMg) }
			};
		});
}
