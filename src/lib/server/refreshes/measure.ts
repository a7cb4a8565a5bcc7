import { driftSettings } from '$lib/drift/params';
import { countsToMg } from '$lib/magnetics/counts';
import { pairOffset } from '$lib/magnetics/set-reset';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as facts from '$lib/server/store/queries/refresh-facts';
import type { OpenRefresh } from '$lib/server/store/queries/refresh-facts';
import { REFRESH_PARAMS } from './params';
import { noiseOf, type ProofInput, type ProofRow } from './proof';
import { stillRows } from './still';

/** Readings before the pulse that tell its noise: the last of these hours. */
const BEFORE_MS = 6 * 3_600_000;
const BEFORE_ROWS = 200;
/** Enough to find 60 still ones among. */
const AFTER_ROWS = 600;
const DEFAULT_SIGMA_MG = 1;

const rowOf = (row: facts.CountRow, profile: SensorProfile): ProofRow => ({
	atMs: row.atMs,
	rawMg: countsToMg([row.x, row.y, row.z], profile),
	polarity: row.polarity,
	tempC: row.tempDc === null ? null : row.tempDc / 10
});

/** Still readings of the empty bay since the pulse, or since the last vehicle left; oldest first. */
export async function stillAfter(
	sql: Sql,
	r: OpenRefresh,
	profile: SensorProfile,
	nowMs: number
): Promise<ProofRow[]> {
	if (r.measureFromMs === null) return [];
	const span = {
		fromMs: r.measureFromMs,
		// A node's clock may run ahead by the minute that the protocol allows.
		toMs: nowMs + 60_000,
		limit: AFTER_ROWS,
		take: 'first' as const
	};
	const rows = await facts.rowsIn(sql, r.nodeId, span);
	const list = rows.map((row) => rowOf(row, profile));
	return stillRows(list, noiseOf(list) ?? DEFAULT_SIGMA_MG);
}

async function stillBefore(sql: Sql, r: OpenRefresh, profile: SensorProfile, pulseAtMs: number) {
	const fromMs = Math.max(pulseAtMs - BEFORE_MS, Math.min(r.baySinceMs ?? 0, pulseAtMs));
	const rows = await facts.rowsIn(sql, r.nodeId, {
		...{ fromMs, toMs: pulseAtMs },
		limit: BEFORE_ROWS,
		take: 'last'
	});
	const list = rows.map((row) => rowOf(row, profile));
	return stillRows(list, noiseOf(list) ?? DEFAULT_SIGMA_MG);
}

const offsetOf = (row: facts.ReferenceRow | null): Vec3 | null =>
	row === null || row.ox === null || row.oy === null || row.oz === null
		? null
		: [row.ox, row.oy, row.oz];

const referenceOf = (row: facts.ReferenceRow | null): ProofInput['reference'] =>
	row === null
		? null
		: {
				fieldMg: [row.x, row.y, row.z],
				offsetMg: offsetOf(row),
				tempC: row.tempC,
				sigmaMg: row.sigmaMg
			};

/** Everything that the proof holds against each other; null while the pair is not there. */
export async function proofInput(
	sql: Sql,
	r: OpenRefresh,
	profile: SensorProfile,
	nowMs: number
): Promise<ProofInput | null> {
	const pair = r.commandId === null ? null : await facts.pairOf(sql, r.nodeId, r.commandId);
	if (pair === null) return null;
	const mg = (counts: Vec3) => countsToMg(counts, profile);
	const before = pair.before;
	const former = await facts.pairBefore(sql, r.nodeId, pair.atMs);
	const reference = await facts.acceptedReference(sql, r.nodeId);
	const drift = await facts.unexplained(sql, r.nodeId, pair.atMs);
	const limitMg = await facts.driftingLimit(sql, r.siteId, r.nodeId, nowMs);
	return {
		pulseAtMs: pair.atMs,
		setMg: mg(pair.set),
		resetMg: mg(pair.reset),
		before:
			before === null || before.polarity === 0
				? null
				: { polarity: before.polarity, rawMg: mg(before.counts) },
		afterMg: pair.after === null ? null : mg(pair.after),
		pulseTempC: pair.tempDc === null ? null : pair.tempDc / 10,
		offsetTaken: pair.accepted,
		offsetRefusal: pair.refusal,
		rowsBefore: await stillBefore(sql, r, profile, pair.atMs),
		rowsAfter: (await stillAfter(sql, r, profile, nowMs)).slice(
			0,
			4 * REFRESH_PARAMS.stillReadings
		),
		offsetBeforeMg:
			former === null ? offsetOf(reference) : pairOffset(mg(former.set), mg(former.reset)),
		reference: referenceOf(reference),
		sensitivityTempcoPerC: profile.sensitivityTempcoPerC,
		unexplainedBeforeMg: drift.beforeMg,
		unexplainedAfterMg: drift.afterMg,
		driftingMg: driftSettings(limitMg === null ? {} : { driftingMg: limitMg }).driftingMg
	};
}
