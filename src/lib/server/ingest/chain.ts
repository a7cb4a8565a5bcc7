/** Nodes chained within this distance are one neighbour group (method, 'History and feed'). */
export const CHAIN_M = 4;

export interface Placed {
	id: number;
	siteId: number;
	eastM: number | null;
	northM: number | null;
}

const root = (parent: Map<number, number>, id: number): number => {
	let at = id;
	for (let up = parent.get(at); up !== undefined && up !== at; up = parent.get(at)) at = up;
	return at;
};

/** Cells of CHAIN_M: whatever is within reach lies in the same cell or one of the eight around it. */
function cellsOf(nodes: readonly Placed[]): Map<string, Placed[]> {
	const cells = new Map<string, Placed[]>();
	for (const node of nodes) {
		if (node.eastM === null || node.northM === null) continue;
		const key = cellKey(
			node.siteId,
			Math.floor(node.eastM / CHAIN_M),
			Math.floor(node.northM / CHAIN_M)
		);
		const cell = cells.get(key);
		if (cell === undefined) cells.set(key, [node]);
		else cell.push(node);
	}
	return cells;
}

const cellKey = (siteId: number, column: number, row: number) => `${siteId}:${column}:${row}`;

function* around(cells: Map<string, Placed[]>, node: Placed): Generator<Placed> {
	if (node.eastM === null || node.northM === null) return;
	const column = Math.floor(node.eastM / CHAIN_M);
	const row = Math.floor(node.northM / CHAIN_M);
	for (let dc = -1; dc <= 1; dc += 1)
		for (let dr = -1; dr <= 1; dr += 1)
			yield* cells.get(cellKey(node.siteId, column + dc, row + dr)) ?? [];
}

const within = (a: Placed, b: Placed): boolean =>
	Math.hypot(
		(a.eastM as number) - (b.eastM as number),
		(a.northM as number) - (b.northM as number)
	) <= CHAIN_M;

export interface Chains {
	/** Members of each group, ids rising. */
	groups: number[][];
	/** Nodes within CHAIN_M of a node, itself left out. */
	neighbours: Map<number, number[]>;
}

/** A node whose place is not known is a group of its own. */
export function chain(nodes: readonly Placed[]): Chains {
	const cells = cellsOf(nodes);
	const parent = new Map(nodes.map(({ id }) => [id, id]));
	const neighbours = new Map<number, number[]>();
	for (const node of nodes) {
		const near = [...around(cells, node)].filter((o) => o.id !== node.id && within(node, o));
		neighbours.set(
			node.id,
			near.map(({ id }) => id)
		);
		for (const other of near) {
			const [a, b] = [root(parent, node.id), root(parent, other.id)];
			// The smaller id is the root, so that a group's key does not depend on the order of reading.
			if (a !== b) parent.set(Math.max(a, b), Math.min(a, b));
		}
	}
	const groups = new Map<number, number[]>();
	for (const { id } of [...nodes].sort((a, b) => a.id - b.id)) {
		const key = root(parent, id);
		const members = groups.get(key);
		if (members === undefined) groups.set(key, [id]);
		else members.push(id);
	}
	return { groups: [...groups.values()], neighbours };
}
