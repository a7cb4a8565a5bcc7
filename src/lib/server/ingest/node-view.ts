import { view } from '$lib/detection/group';
import type { NodeView } from '$lib/detection/types';
import { createSecret } from '$lib/server/secret';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as nodeState from '$lib/server/store/queries/node-state';
import { membersOf } from './groups';
import { restoreState } from './hosted-group';
import { Registry } from './registry';

/** Keys are of no concern here: this registry opens none. */
const NO_SECRET = createSecret('no key is opened for a view of a node');

/**
 * A node's view from its stored state, without its group: enough to show, since what neighbours do
 * is already in it. Null while nothing is stored, or by another version's layout.
 */
export async function readNodeView(sql: Sql, nodeId: number): Promise<NodeView | null> {
	const registry = new Registry(NO_SECRET);
	await registry.loadParameters(sql);
	await registry.loadSome(sql, { ids: [nodeId] }, Date.now());
	const entry = registry.byId(nodeId);
	if (entry === undefined || entry.config.member === null) return null;
	const stored = await nodeState.states(sql, [nodeId]);
	if (stored.length === 0) return null;
	try {
		return view(restoreState(membersOf([entry]), stored), nodeId);
	} catch (error) {
		if (error instanceof RangeError) return null;
		throw error;
	}
}
