/** An override of a setting as stored: of a whole site, or (then `nodeId`) of one node. */
export interface ParameterRow {
	siteId: number;
	nodeId: number | null;
	name: string;
	value: string;
	fromMs: number;
	untilMs: number | null;
}

/** Overrides in force from an event time on, until the next spell. */
export interface Spell {
	fromMs: number;
	params: Readonly<Record<string, number>>;
}

const UNCHANGED: readonly Spell[] = [{ fromMs: -Infinity, params: {} }];

/** All that rows say, by site and node. Rows come in the order of their making. */
export class ParamSpells {
	readonly #bySite = new Map<number, ParameterRow[]>();
	readonly #byNode = new Map<number, ParameterRow[]>();
	/** Nodes without settings of their own share their site's. */
	readonly #ofSite = new Map<number, readonly Spell[]>();

	constructor(rows: readonly ParameterRow[] = []) {
		for (const row of rows) {
			const [kept, key] =
				row.nodeId === null ? [this.#bySite, row.siteId] : [this.#byNode, row.nodeId];
			kept.set(key, [...(kept.get(key) ?? []), row]);
		}
	}

	of(siteId: number, nodeId: number): readonly Spell[] {
		const own = this.#byNode.get(nodeId);
		const site = this.#bySite.get(siteId) ?? [];
		if (own !== undefined) return spells([...site, ...own]);
		const known = this.#ofSite.get(siteId) ?? spells(site);
		this.#ofSite.set(siteId, known);
		return known;
	}
}

/** A node's own rows stand after its site's and win over them. */
function spells(rows: readonly ParameterRow[]): readonly Spell[] {
	if (rows.length === 0) return UNCHANGED;
	const turns = rows.flatMap(({ fromMs, untilMs }) =>
		untilMs === null ? [fromMs] : [fromMs, untilMs]
	);
	const starts = [-Infinity, ...[...new Set(turns)].sort((a, b) => a - b)];
	return starts.map((fromMs) => ({ fromMs, params: inForce(rows, fromMs) }));
}

function inForce(rows: readonly ParameterRow[], atMs: number): Record<string, number> {
	const params: Record<string, number> = {};
	for (const { name, value, fromMs, untilMs } of rows) {
		const number = Number(value);
		const holds = fromMs <= atMs && (untilMs === null || untilMs > atMs);
		if (holds && Number.isFinite(number)) params[name] = number;
	}
	return params;
}

/** The spell of an event time, and when it ends. */
export function spellAt(
	all: readonly Spell[],
	atMs: number
): { params: Spell['params']; fromMs: number; toMs: number } {
	let found = 0;
	for (let i = 1; i < all.length; i += 1) if ((all[i] as Spell).fromMs <= atMs) found = i;
	const { params, fromMs } = all[found] ?? { params: {}, fromMs: -Infinity };
	return { params, fromMs, toMs: all[found + 1]?.fromMs ?? Infinity };
}
