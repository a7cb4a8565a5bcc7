/** A node that is not heard, with what it may share with others. */
export interface SilentNode {
	nodeId: number;
	gateway: string | null;
	/** From where it last connected. */
	network: string | null;
	zone: string;
	/** When it was last heard. */
	sinceMs: number;
}
export type Shared = 'site' | 'gateway' | 'network' | 'zone';

/** How many nodes a site has in all and by each label. */
export interface Totals {
	all: number;
	gateway: ReadonlyMap<string, number>;
	network: ReadonlyMap<string, number>;
	zone: ReadonlyMap<string, number>;
}

export interface Storm {
	shared: Shared;
	label: string;
	members: SilentNode[];
	/** Nodes of the whole site: '84 of 500'. */
	of: number;
	sinceMs: number;
}

/** Fewer are told one by one. */
const LEAST = 5;
/** Of the nodes under one label, as a share: from here on the label is the cause; under the second it is over. */
const BEGINS = 0.6;
const ENDS = 0.3;
/** Of the whole site, whatever they share. */
const SITE_BEGINS = 0.8;
const SITE_LOOSE = 0.2;
const SITE_LOOSE_LEAST = 10;

export interface Sorted {
	storms: Storm[];
	singles: SilentNode[];
}

/**
 * Groups silent nodes by what they share: all over the site first, then one gateway, then one
 * network address, then one zone.
 * `open` are storms told already ('gateway:G2'): they go on until few are left, so that one that
 * flickers around the limit is told once.
 */
export function sortSilent(
	silent: readonly SilentNode[],
	totals: Totals,
	open: ReadonlySet<string>
): Sorted {
	const storms: Storm[] = [];
	let left = [...silent];
	const take = (shared: Shared, label: string, members: SilentNode[]) => {
		storms.push({
			...{ shared, label, members },
			of: totals.all,
			sinceMs: Math.min(...members.map(({ sinceMs }) => sinceMs))
		});
		const gone = new Set(members);
		left = left.filter((node) => !gone.has(node));
	};
	const holds = (key: string, n: number, of: number, begins: number) =>
		open.has(key) ? n >= LEAST - 2 && n >= ENDS * of : n >= LEAST && n >= begins * of;

	if (holds('site:', left.length, totals.all, SITE_BEGINS)) take('site', '', left);
	for (const shared of ['gateway', 'network', 'zone'] as const)
		for (const [label, members] of byLabel(left, shared))
			if (holds(`${shared}:${label}`, members.length, totals[shared].get(label) ?? 0, BEGINS))
				take(shared, label, members);
	if (left.length >= Math.max(SITE_LOOSE_LEAST, SITE_LOOSE * totals.all)) take('site', '', left);
	return { storms, singles: left };
}

function byLabel(nodes: readonly SilentNode[], shared: Exclude<Shared, 'site'>) {
	const labels = new Map<string, SilentNode[]>();
	for (const node of nodes) {
		const label = node[shared];
		if (label !== null) labels.set(label, [...(labels.get(label) ?? []), node]);
	}
	return [...labels].sort((a, b) => b[1].length - a[1].length);
}
