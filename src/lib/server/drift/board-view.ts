import { setImmediate as breathe } from 'node:timers/promises';
import { K_LOWER_LIMITS_MG, kIndex } from '$lib/drift/k-scale';
import type { DriftBoard, DriftRow } from '$lib/schemas/desk-drift';
import { rfc3339, rfc3339OrNull } from '$lib/server/api/time';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as state from '$lib/server/store/queries/drift-state';
import * as views from '$lib/server/store/queries/drift-view';
import { HOUR_MS } from './node-hours';
import { rounded, roundedVector, rowView } from './row-view';
import { settingsAt } from './site-nodes';

const BATCH_ROWS = 200;
const WINDOW_MS = 3 * HOUR_MS;

/** The Drift board of one site: nodes ranked, and the site's geomagnetic line with the K scale's limits. */
export async function driftBoard(
	sql: Sql,
	site: { id: number; pairRule: DriftBoard['pairRule'] },
	lineHours: number,
	nowMs: number
): Promise<DriftBoard> {
	const settings = await settingsAt(sql, site.id, nowMs);
	const rows: DriftRow[] = [];
	for (const [i, row] of (await views.ofSite(sql, site.id)).entries()) {
		rows.push(rowView(row, settings.of(row.nodeId)));
		if (i % BATCH_ROWS === BATCH_ROWS - 1) await breathe();
	}
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
