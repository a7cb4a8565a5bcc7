import { countsToMg, isClipped } from '$lib/magnetics/counts';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import { scale, type Vec3 } from '$lib/magnetics/vector';
import type { NodeRow } from '$lib/server/store/queries/nodes';
import * as nodes from '$lib/server/store/queries/nodes';
import { readProfile } from '$lib/server/store/queries/profiles';
import * as readings from '$lib/server/store/queries/readings';
import { ok, type Answer } from './answer';
import { badCursor } from './bays';
import { decodeCursor, encodeCursor } from './cursor';
import type { Instance } from './instance';
import { rawCursor } from './nodes';
import { problem, type Problem } from './problem';
import { rfc3339 } from './time';

const HOUR_MS = 3_600_000;
const DEFAULT_RANGE_MS = 24 * HOUR_MS;
const LONGEST_RANGE_MS = 800 * 24 * HOUR_MS;
const CLIPPED = 1;

export interface ReadingQuery {
	from: number | undefined;
	to: number | undefined;
	points: number;
	raw: boolean;
	limit: number;
	cursor: string | undefined;
}

/**
 * Readings of a node in [from, to), the last day when nothing is said. Field = counts over the scale;
 * in single readings the polarity is taken out, in buckets it is 1 but around RESET pulses.
 */
export async function listReadings(
	app: Instance,
	node: NodeRow,
	q: ReadingQuery,
	nowMs: number
): Promise<Answer | Problem> {
	const toMs = q.to ?? nowMs + 60_000;
	const fromMs = q.from ?? toMs - DEFAULT_RANGE_MS;
	if (fromMs >= toMs) return problem(400, 'Query: from must lie before to.');
	if (toMs - fromMs > LONGEST_RANGE_MS) return problem(422, 'At most 800 days at a time.');
	if (!q.raw && q.cursor !== undefined) {
		return problem(400, 'Query: cursor: goes with raw=true only.');
	}
	const body = await nodes.profileBody(app.store.db, node.profileCode);
	const profile = readProfile(node.profileCode, body ?? '');
	if (profile === null) return problem(422, "The node's sensor profile cannot be read.");
	return q.raw
		? await raw(app, node, q, { fromMs, toMs }, profile)
		: await buckets(app, node, { fromMs, toMs }, q.points, profile);
}

const round2 = (mg: number): number => Math.round(mg * 100) / 100;
const field = (counts: Vec3, profile: SensorProfile, polarity: 1 | -1 = 1): Vec3 => {
	const [x, y, z] = scale(countsToMg(counts, profile), polarity);
	return [round2(x), round2(y), round2(z)];
};

type Range = { fromMs: number; toMs: number };

async function raw(
	app: Instance,
	node: NodeRow,
	q: ReadingQuery,
	range: Range,
	profile: SensorProfile
): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? null : decodeCursor(rawCursor, q.cursor);
	if (q.cursor !== undefined && at === null) return badCursor();
	const page = await readings.raw(app.store.pool, node.id, range, at, q.limit);
	const items = page.rows.map((row) => {
		const [x, y, z] = field([row.x, row.y, row.z], profile, row.polarity);
		return {
			at: rfc3339(row.atMs),
			boot: row.boot,
			seq: row.seq,
			row: row.row,
			...{ x, y, z },
			polarity: row.polarity,
			tempC: row.tempDc === null ? null : row.tempDc / 10,
			batteryMv: row.batteryMv,
			rssiDbm: row.rssiDbm,
			clipped: (row.flags & CLIPPED) !== 0 || isClipped([row.x, row.y, row.z], profile)
		};
	});
	const next = page.next === null ? null : encodeCursor(page.next);
	return ok({ items, next, bucketMs: null });
}

async function buckets(
	app: Instance,
	node: NodeRow,
	range: Range,
	points: number,
	profile: SensorProfile
): Promise<Answer> {
	const few = await readings.raw(app.store.pool, node.id, range, null, points);
	if (few.next === null) {
		const items = few.rows.map((row) => {
			const at = field([row.x, row.y, row.z], profile, row.polarity);
			const tempC = row.tempDc === null ? null : row.tempDc / 10;
			return { at: rfc3339(row.atMs), n: 1, min: at, max: at, mean: at, tempC };
		});
		return ok({ items, next: null, bucketMs: null });
	}
	const rows = await readings.buckets(app.store.pool, node.id, range.fromMs, range.toMs, points);
	const items = rows.map((b) => ({
		at: rfc3339(b.fromMs),
		n: b.n,
		min: field(b.min, profile),
		max: field(b.max, profile),
		mean: field(b.mean, profile),
		tempC: b.tempDc === null ? null : Math.round(b.tempDc) / 10
	}));
	const first = rows[0];
	return ok({
		items,
		next: null,
		bucketMs: first === undefined ? null : first.toMs - first.fromMs
	});
}
