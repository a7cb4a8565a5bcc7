import { packMemory } from '$lib/drift/codec';
import { startDrift, type NodeDrift } from '$lib/drift/node-drift';
import { driftSettings } from '$lib/drift/params';
import { closeSiteHour } from '$lib/drift/site-hour';
import type { HourRecord } from '$lib/drift/types';
import type { Vec3 } from '$lib/magnetics/vector';
import * as driftHours from '$lib/server/store/queries/drift-hours';
import * as driftState from '$lib/server/store/queries/drift-state';
import type { Store } from '$lib/server/store/connect';
import type { Seeded } from './seed';

const HOUR_MS = 3_600_000;
const HOURS = 8 * 24;
const DAY_H = 24;
const OFFSET: Vec3 = [12, -7, 20];
const FIELD: Vec3 = [190, -25, 440];
const PER_C: Vec3 = [0.4, -0.1, -0.6];
const REFERENCE_C = 14;

/** What each seeded node's field does beside temperature, mG at its end: all of it comes in the last two days. */
const RAMPS_MG: Readonly<Record<string, Vec3>> = {
	'SEED-A-03': [8, -3, 11],
	'SEED-B-02': [-12, 5, 19],
	'SEED-A-04': [0, 0, 1],
	'SEED-A-06': [0, 0, 0],
	'SEED-A-08': [0, 1, 0],
	'SEED-A-10': [0, 0, 0]
};
const RAMP_H = 48;
/** Common to all nodes: a day's geomagnetic swing. */
const SWING_MG = 0.6;

const tempAt = (h: number): number =>
	REFERENCE_C + 6 * Math.sin((2 * Math.PI * h) / DAY_H) + 2 * Math.sin(h / 31);

function hourOf(serial: string, h: number, fromMs: number): HourRecord {
	const share = Math.max(0, (h - (HOURS - RAMP_H)) / RAMP_H);
	const ramp = RAMPS_MG[serial] ?? [0, 0, 0];
	const swing = SWING_MG * Math.cos((2 * Math.PI * h) / DAY_H);
	const ripple = (axis: number) => 0.15 * Math.sin(h * (axis + 1.7) + serial.length);
	const warm = tempAt(h) - REFERENCE_C;
	const field = FIELD.map(
		(mg, axis) =>
			mg +
			(PER_C[axis] ?? 0) * warm +
			(ramp[axis] ?? 0) * share +
			(axis === 0 ? swing : 0) +
			ripple(axis)
	) as unknown as Vec3;
	return {
		...{ hourMs: fromMs + h * HOUR_MS, fieldMg: field, offsetMg: OFFSET },
		...{ tempC: tempAt(h), n: 40, stay: null }
	};
}

async function acceptedReference(store: Store, seeded: Seeded, serial: string, atMs: number) {
	const nodeId = seeded.nodes[serial] ?? 0;
	const bayId = seeded.bays[serial.replace('SEED-', '')] ?? 0;
	const values = [nodeId, bayId, atMs, ...FIELD, 0.8, REFERENCE_C, ...OFFSET, 60, atMs];
	const [rows] = await store.pool.query(
		`INSERT INTO reference (node_id, bay_id, learned_at_ms, x_mg, y_mg, z_mg, sigma_mg, temp_c, offset_x_mg,
			offset_y_mg, offset_z_mg, readings, accepted_at_ms) VALUES (?) RETURNING id`,
		[values]
	);
	return { nodeId, referenceId: (rows as { id: number }[])[0]?.id ?? 0 };
}

/**
 * Eight days of closed hours for six nodes of the yard, by drift's own functions: A-03 past the drifting
 * limit, B-02 past that of a film refresh, four that only follow temperature and the site's line.
 */
export async function seedDrift(store: Store, seeded: Seeded): Promise<void> {
	const toMs = Math.floor(seeded.nowMs / HOUR_MS) * HOUR_MS;
	const fromMs = toMs - HOURS * HOUR_MS;
	const settings = driftSettings();
	const known = new Map<number, { serial: string; referenceId: number; drift: NodeDrift }>();
	for (const serial of Object.keys(RAMPS_MG)) {
		const { nodeId, referenceId } = await acceptedReference(
			store,
			seeded,
			serial,
			fromMs - HOUR_MS
		);
		const reference = { atMs: fromMs, fieldMg: FIELD, offsetMg: OFFSET, tempC: REFERENCE_C };
		known.set(nodeId, { serial, referenceId, drift: startDrift(reference, -0.003) });
	}
	const stored: driftHours.StoredHour[] = [];
	for (let h = 0; h < HOURS; h += 1) {
		const nodes = [...known].map(([nodeId, { serial, drift }]) => ({
			...{ nodeId, drift, hour: hourOf(serial, h, fromMs) }
		}));
		const { line, closed } = closeSiteHour(nodes, settings);
		for (const [i, { nodeId, drift, parts }] of closed.entries()) {
			const one = known.get(nodeId);
			const record = nodes[i]?.hour;
			if (one === undefined || record === undefined) continue;
			one.drift = drift;
			stored.push({ nodeId, record, parts });
		}
		const { verdict, changeMg, spreadMg, nodes: count } = line;
		const hourMs = fromMs + h * HOUR_MS;
		await driftState.writeLine(store.pool, seeded.sites.yard, {
			...{ hourMs, verdict, changeMg: [...changeMg], spreadMg, nodes: count }
		});
	}
	await driftHours.write(store.pool, stored);
	await writeMemories(store, seeded, known);
	const siteId = seeded.sites.yard;
	await driftState.writeSite(store.pool, { siteId, fromMs, closedToMs: toMs });
}

async function writeMemories(
	store: Store,
	seeded: Seeded,
	known: ReadonlyMap<number, { referenceId: number; drift: NodeDrift }>
): Promise<void> {
	const film = { lastPulseAtMs: null, lastClippedAtMs: null, lastOverFilmAtMs: null };
	const placedAtMs = seeded.nowMs - 30 * DAY_H * HOUR_MS;
	await driftState.writeMemories(
		store.pool,
		[...known].map(([nodeId, { referenceId, drift }]) => ({
			...{ nodeId, siteId: seeded.sites.yard, placedAtMs },
			memory: packMemory({ referenceId, drift, film }),
			driftingSinceMs: drift.watch.driftingSinceMs,
			refreshSinceMs: drift.watch.refreshBeganMs,
			pairWanted: null
		}))
	);
}
