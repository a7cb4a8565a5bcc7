import { PARAMS } from '$lib/detection/params';
import { DRIFT_PARAMS } from '$lib/drift/params';
import type { ParameterChange, ParameterIn, ParameterItem } from '$lib/schemas/desk-parameters';
import { namesFor } from '$lib/server/auth/names';
import type { Reach } from '$lib/server/auth/reach';
import { request } from '$lib/server/store/queries/act-requests';
import * as audit from '$lib/server/store/queries/audit';
import type { NodeRow } from '$lib/server/store/queries/nodes';
import * as parameters from '$lib/server/store/queries/parameters';
import type { Tx } from '$lib/server/store/transaction';
import type { Instance } from './instance';
import { problem, type Problem } from './problem';
import { rfc3339, rfc3339OrNull } from './time';

interface Spec {
	readonly defaultValue: number;
	readonly min: number;
	readonly max: number;
	readonly unit: string;
	readonly reason: string;
}

type Named = Spec & { part: 'detection' | 'drift' };

/** Every setting of detection and drift, as their own tables have it: one list of names. */
const catalogue = (part: Named['part'], specs: Readonly<Record<string, Spec>>): [string, Named][] =>
	Object.entries(specs).map(([name, spec]) => [name, { ...spec, part }]);

const CATALOGUE: ReadonlyMap<string, Named> = new Map([
	...catalogue('detection', PARAMS),
	...catalogue('drift', DRIFT_PARAMS)
]);

type Changes = Awaited<ReturnType<typeof parameters.changes>>;

export async function parameterSheet(
	app: Instance,
	reach: Reach,
	siteId: number,
	node: NodeRow | null,
	nowMs: number
) {
	const rows = (await parameters.changes(app.store.db, siteId, node?.id ?? null)).filter(
		({ personal }) => reach.personalAllowed || personal !== true
	);
	const nameOf = await namesFor(app, reach, nowMs);
	return {
		node: node?.serial ?? null,
		items: [...CATALOGUE].map(([name, spec]) => itemOf(name, spec, rows, node, nameOf)),
		changes: rows.map((one) => changeOf(one, rows, nameOf))
	};
}

type NameOf = Awaited<ReturnType<typeof namesFor>>;

function itemOf(
	name: string,
	spec: Named,
	rows: Changes,
	node: NodeRow | null,
	nameOf: NameOf
): ParameterItem {
	const holding = (nodeId: number | null) => {
		const found = rows.find(
			({ row }) => row.name === name && row.nodeId === nodeId && row.untilMs === null
		);
		if (found === undefined) return null;
		const { id, value, fromMs, byActor, why } = found.row;
		const by = nameOf(byActor, fromMs);
		return { id, value: Number(value), since: rfc3339(fromMs), by, why };
	};
	const site = holding(null);
	const own = node === null ? null : holding(node.id);
	return {
		name,
		...spec,
		site,
		node: own,
		value: (own ?? site)?.value ?? spec.defaultValue,
		source: own !== null ? 'node' : site !== null ? 'site' : 'default'
	};
}

function changeOf(one: Changes[number], rows: Changes, nameOf: NameOf): ParameterChange {
	const { row, serial, bay } = one;
	const later = rows.some(
		({ row: other }) => other.id > row.id && other.name === row.name && other.nodeId === row.nodeId
	);
	return {
		id: row.id,
		name: row.name,
		node: serial,
		bay,
		value: Number(row.value),
		from: rfc3339(row.fromMs),
		until: rfc3339OrNull(row.untilMs),
		by: nameOf(row.byActor, row.fromMs),
		why: row.why,
		endedBy: row.untilMs === null ? null : nameOf(row.endedBy, row.untilMs),
		endedWhy: row.endedWhy,
		undo: !later
	};
}

/** A number as people write it: no trailing noise of binary fractions. */
const written = (value: number, unit: string): string =>
	`${Number(value.toPrecision(6))}${unit === '1' ? '' : ` ${unit}`}`;

/** Names the field and its range, or null where the value may stand. */
export function refuseParameter(name: string, value: number | null): Problem | null {
	const spec = CATALOGUE.get(name);
	if (spec === undefined)
		return problem(422, `There is no setting '${name}'.`, {
			errors: [{ pointer: '#/name', detail: 'is no setting of detection or drift' }]
		});
	if (value === null || (value >= spec.min && value <= spec.max)) return null;
	const range = `${written(spec.min, spec.unit)} to ${written(spec.max, spec.unit)}`;
	return problem(422, `${name} must lie within ${range}; ${value} does not.`, {
		errors: [{ pointer: '#/value', detail: `must lie within ${range}` }]
	});
}

interface By {
	siteId: number;
	node: NodeRow | null;
	actor: string;
	nowMs: number;
}

type Wanted = Pick<ParameterIn, 'name' | 'value' | 'why'>;

/** Ends what is in force and begins the new; returns the act with which the pipeline takes it up. */
export async function setParameter(tx: Tx, by: By, wanted: Wanted): Promise<number | Problem> {
	const refused = refuseParameter(wanted.name, wanted.value);
	if (refused !== null) return refused;
	const scope = { siteId: by.siteId, nodeId: by.node?.id ?? null };
	const current = await parameters.inForce(tx.db, scope, wanted.name);
	if (wanted.value === null && current === null)
		return problem(409, `${wanted.name} is not set here: there is nothing to take back.`);
	if (current !== null && Number(current.value) === wanted.value)
		return problem(409, `${wanted.name} stands at ${current.value} already.`);
	const { actor, nowMs } = by;
	const { name, value, why } = wanted;
	if (current !== null) await parameters.end(tx.db, current.id, { actor, why }, nowMs);
	const began =
		value === null
			? undefined
			: await parameters.begin(tx.db, { ...scope, name, value, byActor: actor, why }, nowMs);
	return await tell(tx, by, wanted, { began, ended: current?.id });
}

async function tell(
	tx: Tx,
	{ siteId, node, actor, nowMs }: By,
	{ name, value, why }: Wanted,
	ids: { began: number | undefined; ended: number | undefined }
): Promise<number> {
	const detail = { name, value, why, node: node?.serial ?? null };
	await audit.note(
		tx.db,
		{ actor, siteId, what: 'parameter.changed', subject: name, detail },
		nowMs
	);
	const args = {
		...(ids.began === undefined ? {} : { began: ids.began }),
		...(ids.ended === undefined ? {} : { ended: ids.ended })
	};
	const at = { siteId, nodeId: node?.id ?? null, bayId: node?.bayId ?? null };
	return await request(
		tx.db,
		{ ...at, kind: 'parameters', args, atMs: nowMs, byActor: actor, why },
		nowMs
	);
}

/** What stood before a change is set again, while nothing changed it since. */
export async function undoParameter(tx: Tx, by: By, id: number): Promise<number | Problem> {
	const row = await parameters.byId(tx.db, by.siteId, id);
	if (row === null || row.nodeId !== (by.node?.id ?? null))
		return problem(404, 'There is no such change of a setting.');
	const scope = { siteId: row.siteId, nodeId: row.nodeId };
	const last = await parameters.newest(tx.db, scope, row.name, null);
	if (last?.id !== row.id)
		return problem(409, `${row.name} was changed again since: set it as you want it.`);
	const why = `undone: ${row.untilMs === null ? row.why : (row.endedWhy ?? row.why)}`.slice(0, 400);
	if (row.untilMs !== null)
		return await setParameter(tx, by, { name: row.name, value: Number(row.value), why });
	const before = await parameters.newest(tx.db, scope, row.name, row.id);
	const value = before?.untilMs === row.fromMs ? Number(before.value) : null;
	return await setParameter(tx, by, { name: row.name, value, why });
}
