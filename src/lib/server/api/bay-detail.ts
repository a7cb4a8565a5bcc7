import type { bayDetail as shape } from '$lib/schemas/v1/bays';
import { type BayPatch } from '$lib/schemas/v1/bays';
import type { z } from 'zod';
import type { Reach } from '$lib/server/auth/reach';
import * as bays from '$lib/server/store/queries/bays';
import * as changes from '$lib/server/store/queries/changes';
import * as nodes from '$lib/server/store/queries/nodes';
import type { Db } from '$lib/server/store/queries/people';
import { readProfile } from '$lib/server/store/queries/profiles';
import * as sites from '$lib/server/store/queries/sites';
import type { Tx } from '$lib/server/store/transaction';
import { countsToMg } from '$lib/magnetics/counts';
import { scale, type Vec3 } from '$lib/magnetics/vector';
import { ok, type Answer } from './answer';
import { geometryText } from './bays';
import type { Instance } from './instance';
import { notHere } from './locate';
import { problem, type Problem } from './problem';
import { rfc3339OrNull } from './time';
import { bayView, evidenceOf, geometryOf } from './bay-view';

interface Where {
	app: Instance;
	site: sites.SiteRow;
	reach: Reach;
}

/** A living bay of the site that the reader may see. */
export async function findBay(at: Where, code: string | undefined): Promise<bays.BayRow | Problem> {
	const bay = await bays.byCode(at.app.store.db, at.site.id, code ?? '');
	return bay === null || (bay.personal && !at.reach.personalAllowed) ? notHere(at.reach) : bay;
}

type Report = NonNullable<z.output<typeof shape>['report']>;

const round = (mg: number): number => Math.round(mg * 100) / 100;
const rounded = (v: Vec3 | null): [number, number, number] | null =>
	v === null ? null : [round(v[0]), round(v[1]), round(v[2])];
const roundedOrNull = (mg: number | null): number | null => (mg === null ? null : round(mg));

/** What the node itself said last, and how detection reads it. */
async function reportOf(app: Instance, db: Db, row: bays.BayViewRow): Promise<Report | null> {
	if (row.nodeId === null || row.serial === null) return null;
	const node = await nodes.bySerial(db, row.serial);
	const heard = await nodes.lastHeard(db, row.nodeId);
	if (heard === null || node === null) return null;
	const profile = readProfile(node.profileCode, heard.profileBody);
	const { x, y, z } = heard;
	const raw =
		profile === null || x === null || y === null || z === null
			? null
			: scale(countsToMg([x, y, z], profile), heard.polarity ?? 1);
	const view = await app.nodeView(row.nodeId);
	return {
		serial: row.serial,
		heardAt: rfc3339OrNull(heard.heardAtMs),
		fieldMg: rounded(view?.fieldMg ?? raw),
		baselineMg: rounded(view?.baselineMg ?? null),
		disturbanceMg: roundedOrNull(view?.disturbanceMg ?? null),
		onMg: roundedOrNull(view?.onMg ?? null),
		offMg: roundedOrNull(view?.offMg ?? null),
		tempC: heard.tempDc === null ? null : heard.tempDc / 10,
		batteryMv: heard.batteryMv
	};
}

export async function bayDetail(
	app: Instance,
	db: Db,
	bayId: number,
	nowMs: number
): Promise<Answer | Problem> {
	const [row] = await bays.views(db, [bayId]);
	if (row === undefined) return problem(404, 'There is no such bay.');
	const { siteId } = (await bays.byId(db, bayId)) ?? { siteId: 0 };
	const closed = (await bays.closedAt(db, siteId, nowMs)).get(bayId);
	return ok({
		...bayView(row, closed),
		personal: row.personal,
		geometry: geometryOf(row.geometry),
		evidence: evidenceOf(row.evidence),
		report: await reportOf(app, db, row)
	});
}

/** Changes what is said of a bay, with its row in the log; null when done. */
export async function patchBay(
	tx: Tx,
	siteId: number,
	bay: bays.BayRow,
	wanted: BayPatch,
	nowMs: number
): Promise<Problem | null> {
	if (wanted.code !== undefined && wanted.code !== bay.code) {
		const other = await bays.byCode(tx.db, siteId, wanted.code);
		if (other !== null) return problem(409, `There is a bay '${wanted.code}' already.`);
	}
	const { code, zone, geometry, personal } = wanted;
	await bays.patch(tx.db, bay.id, {
		...(code === undefined ? {} : { code }),
		...(zone === undefined ? {} : { zoneId: await sites.ensureZone(tx.db, siteId, zone) }),
		...(geometry === undefined ? {} : { geometry: geometryText(geometry) }),
		...(personal === undefined ? {} : { personal })
	});
	const row = { kind: 'geometry' as const, bayId: bay.id, nodeId: null };
	await changes.append(tx.sql, siteId, [row], nowMs);
	return null;
}
