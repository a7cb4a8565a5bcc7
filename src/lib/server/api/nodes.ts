import type { NodeView } from '$lib/detection/types';
import { z } from 'zod';
import type { NodeIn, NodePatch } from '$lib/schemas/v1/nodes';
import { countsToMg, isClipped } from '$lib/magnetics/counts';
import { scale, type Vec3 } from '$lib/magnetics/vector';
import { request } from '$lib/server/store/queries/act-requests';
import * as bays from '$lib/server/store/queries/bays';
import * as nodes from '$lib/server/store/queries/nodes';
import type { Db } from '$lib/server/store/queries/people';
import { ensure, readProfile } from '$lib/server/store/queries/profiles';
import type { Tx } from '$lib/server/store/transaction';
import { ok, type Answer } from './answer';
import { badCursor } from './bays';
import { decodeCursor, encodeCursor, idCursor } from './cursor';
import type { Instance } from './instance';
import { nodeKey, sealNodeKey, shownKey } from './node-keys';
import { problem, type Problem } from './problem';
import { rfc3339, rfc3339OrNull } from './time';
import { listOf } from './bay-view';

function conditionOf(row: nodes.NodeSummaryRow): NonNullable<nodes.NodeSummaryRow['condition']> {
	if (row.withdrawnAtMs !== null) return 'withdrawn';
	if (row.bayCode === null) return 'unplaced';
	return row.condition ?? 'learning';
}

export const nodeSummary = (row: nodes.NodeSummaryRow) => ({
	serial: row.serial,
	site: row.siteSlug,
	bay: row.bayCode,
	profile: row.profileCode,
	gateway: row.gateway,
	condition: conditionOf(row),
	also: listOf(row.also),
	preCommissioned: row.preCommissioned,
	unsignedAllowed: row.unsignedAllowed,
	firmware: row.firmware,
	heardAt: rfc3339OrNull(row.heardAtMs),
	placedAt: rfc3339OrNull(row.placedAtMs),
	withdrawnAt: rfc3339OrNull(row.withdrawnAtMs)
});

export interface NodeQuery {
	siteId: number;
	personal: boolean;
	limit: number;
	cursor: string | undefined;
}

export async function listNodes(app: Instance, q: NodeQuery): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? { after: 0 } : decodeCursor(idCursor, q.cursor);
	if (at === null) return badCursor();
	const { siteId, personal, limit } = q;
	const page = { siteId, personal, afterId: at.after, limit: limit + 1 };
	const rows = await nodes.page(app.store.db, page);
	const shown = rows.slice(0, limit);
	const last = shown.at(-1);
	const more = rows.length > limit && last !== undefined;
	return ok({
		items: shown.map(nodeSummary),
		next: more ? encodeCursor({ after: last.id }) : null
	});
}

const vec = (x: number | null, y: number | null, z: number | null): Vec3 | null =>
	x === null || y === null || z === null ? null : [x, y, z];

/** To 0.01 mG: finer than any count. */
const rounded = (v: Vec3): Vec3 => [round2(v[0]), round2(v[1]), round2(v[2])];
const round2 = (mg: number): number => Math.round(mg * 100) / 100;

async function lastReading(db: Db, row: nodes.NodeRow) {
	const heard = await nodes.lastHeard(db, row.id);
	const profile = heard === null ? null : readProfile(row.profileCode, heard.profileBody);
	const counts = heard === null ? null : vec(heard.x, heard.y, heard.z);
	if (heard?.lastAtMs == null || profile === null || counts === null) return null;
	return {
		at: rfc3339(heard.lastAtMs),
		fieldMg: rounded(scale(countsToMg(counts, profile), heard.polarity ?? 1)),
		tempC: heard.tempDc === null ? null : heard.tempDc / 10,
		batteryMv: heard.batteryMv,
		clipped: isClipped(counts, profile)
	};
}

async function referenceView(db: Db, nodeId: number, view: NodeView | null) {
	const r = await nodes.currentReference(db, nodeId);
	if (r === null) return { reference: null, offsetMg: null };
	const offset = vec(r.offsetXMg, r.offsetYMg, r.offsetZMg);
	return {
		reference: {
			learnedAt: rfc3339(r.learnedAtMs),
			fieldMg: rounded([r.xMg, r.yMg, r.zMg]),
			sigmaMg: round2(r.sigmaMg),
			tempC: r.tempC,
			acceptedAt: rfc3339OrNull(r.acceptedAtMs),
			provisional: r.provisional && (view?.provisional ?? true)
		},
		offsetMg: offset === null ? null : rounded(offset)
	};
}

/** Everything that is told of one node. */
export async function nodeDetail(app: Instance, serial: string): Promise<Answer | Problem> {
	const { db } = app.store;
	const row = await nodes.bySerial(db, serial);
	const summary = row === null ? null : await nodes.summaryOf(db, row.id);
	if (row === null || summary === null) return problem(404, 'There is no such node.');
	const view = await app.nodeView(row.id);
	const learned = await referenceView(db, row.id, view);
	const inUse = view?.offsetMg ?? null;
	return ok({
		...nodeSummary(summary),
		periodS: row.periodS,
		deltaMg: row.deltaMg,
		headingDeg: row.headingDeg,
		eastM: row.eastM,
		northM: row.northM,
		reading: await lastReading(db, row),
		reference: learned.reference,
		offsetMg: inUse === null ? learned.offsetMg : rounded(inUse),
		keyOverlapUntil: rfc3339OrNull(row.keyPrevUntilMs)
	});
}

interface By {
	app: Instance;
	siteId: number;
	actor: string;
	nowMs: number;
}

async function checkNew(tx: Tx, by: By, given: readonly NodeIn[]): Promise<Problem | null> {
	const serials = given.map((n) => n.serial);
	if (new Set(serials).size !== serials.length) return problem(409, 'A serial is given twice.');
	const taken = await nodes.taken(tx.db, serials);
	if (taken[0] !== undefined)
		return problem(409, `The serial '${taken[0]}' is registered already.`);
	for (const code of new Set(given.map((n) => n.profile))) {
		if (!(await ensure(tx.db, code, by.nowMs))) {
			return problem(422, `There is no sensor profile '${code}'.`);
		}
	}
	return null;
}

/** Registers nodes, places those that name a bay. The keys in the answer are shown this once. */
export async function addNodes(
	tx: Tx,
	by: By,
	given: readonly NodeIn[]
): Promise<{ items: ReturnType<typeof shownKey>[] } | Problem> {
	const trouble = await checkNew(tx, by, given);
	if (trouble !== null) return trouble;
	const items: ReturnType<typeof shownKey>[] = [];
	const used = new Set<string>();
	for (const wanted of given) {
		const key = nodeKey(wanted.key);
		const id = await nodes.create(
			tx.db,
			{
				serial: wanted.serial,
				siteId: by.siteId,
				profileCode: wanted.profile,
				gateway: wanted.gateway ?? null,
				mqttHash: key.mqttHash,
				preCommissioned: wanted.preCommissioned,
				unsignedAllowed: wanted.unsignedAllowed
			},
			by.nowMs
		);
		await nodes.setKey(tx.db, id, sealNodeKey(by.app, id, key.key));
		if (wanted.bay !== undefined) {
			if (used.has(wanted.bay)) return problem(409, `Two nodes name the bay '${wanted.bay}'.`);
			used.add(wanted.bay);
			const placed = await placeIn(tx, by, id, wanted.bay, wanted.preCommissioned);
			if (typeof placed !== 'number') return placed;
		}
		items.push(shownKey(wanted.serial, key));
	}
	return { items };
}

/** Writes the act that puts a node into a bay; the pipeline does it. Returns the act's id. */
export async function placeIn(
	tx: Tx,
	by: By,
	nodeId: number,
	bayCode: string,
	preCommissioned: boolean,
	atMs = by.nowMs
): Promise<number | Problem> {
	const bay = await bays.byCode(tx.db, by.siteId, bayCode);
	if (bay === null) return problem(422, `There is no bay '${bayCode}' at this site.`);
	const holder = await nodes.ofBay(tx.db, bay.id);
	if (holder !== null && holder.id !== nodeId) {
		return problem(409, `Bay '${bayCode}' has the node ${holder.serial}: withdraw it first.`);
	}
	return await request(
		tx.db,
		{
			siteId: by.siteId,
			nodeId,
			bayId: bay.id,
			kind: 'place',
			args: { preCommissioned },
			atMs,
			byActor: by.actor
		},
		by.nowMs
	);
}

export const rawCursor = z.strictObject({
	atMs: z.int(),
	boot: z.int(),
	seq: z.int(),
	row: z.int()
});

/** Columns of what a PATCH says; what it leaves out stays. */
export function nodeValues({ profile, ...rest }: NodePatch): nodes.NodeValues {
	// JSON knows no undefined: what is there has a value.
	const values = { ...rest, ...(profile === undefined ? {} : { profileCode: profile }) };
	return values as nodes.NodeValues;
}
