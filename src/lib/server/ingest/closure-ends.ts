import { run, select } from '$lib/server/store/queries/bulk';
import type { Pipeline } from './pipeline';
import { allotAndWrite, type SiteNews } from './steps/feed';

interface EndedRow {
	id: number;
	siteId: number;
	bayId: number;
	toMs: number;
	nodeId: number | null;
	stage: number;
}

/** Detection's word for a bay whose quiet field changed while it was closed. */
const AFTER_WORKS = 'after works';

/**
 * Closures whose end has come are over, and readers are told; what the check at the end found is
 * written once the node's first rows after it are in (method 4, closed).
 */
export async function endClosures(pipeline: Pipeline, nowMs: number): Promise<number> {
	const { room } = pipeline;
	const rows = await select<EndedRow>(
		room.pool,
		`SELECT c.id, c.site_id AS siteId, c.bay_id AS bayId, COALESCE(c.lifted_at_ms, c.to_ms) AS toMs, n.id AS nodeId, c.stage
		 FROM closure c LEFT JOIN node n ON n.bay_id = c.bay_id AND n.withdrawn_at_ms IS NULL
		 WHERE COALESCE(c.lifted_at_ms, c.to_ms) <= ? AND (c.stage < 2 OR c.end_finding IS NULL) AND c.from_ms <= ?`,
		[nowMs, nowMs]
	);
	let ended = 0;
	for (const row of rows) {
		if (row.stage < 2) {
			await pipeline.exclusive(async () => await end(pipeline, row, nowMs));
			ended += 1;
		}
		await writeFinding(pipeline, row);
	}
	return ended;
}

async function end({ room }: Pipeline, row: EndedRow, nowMs: number): Promise<void> {
	const news: SiteNews = {
		events: [],
		shown: [],
		other: [{ kind: 'closure', bayId: row.bayId, nodeId: row.nodeId }]
	};
	await room.transactions.run(async (sql) => {
		await run(sql, 'UPDATE closure SET stage = 2 WHERE id = ?', [row.id]);
		await allotAndWrite(sql, new Map([[row.siteId, news]]), nowMs);
	});
}

async function writeFinding(pipeline: Pipeline, row: EndedRow): Promise<void> {
	const finding = findingOf(pipeline, row);
	if (finding === null) return;
	await run(pipeline.room.pool, 'UPDATE closure SET end_finding = ? WHERE id = ?', [
		finding,
		row.id
	]);
}

function findingOf(pipeline: Pipeline, row: EndedRow): string | null {
	if (row.nodeId === null) return 'no node';
	const entry = pipeline.room.registry.byId(row.nodeId);
	const view = pipeline.viewOf(row.nodeId);
	if (view === null || (entry?.live.pointer?.atMs ?? 0) <= row.toMs) return null;
	return view.doubt?.reason === AFTER_WORKS ? AFTER_WORKS : 'as before';
}
