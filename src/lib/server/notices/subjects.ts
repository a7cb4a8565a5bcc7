import type { NoticeFacts, NoticeKind } from '$lib/schemas/notices';
import type { Subject } from './reconcile';
import { sortSilent, type SilentNode, type Storm, type Totals } from './storm';

/** A placed node in need of a look, as its bay shows it. */
export interface TroubledNode {
	nodeId: number;
	bayId: number;
	bay: string;
	zone: string;
	gateway: string | null;
	network: string | null;
	condition: string;
	/** Comma separated. */
	also: string;
	doubtReason: string | null;
	doubtSinceMs: number | null;
	heardAtMs: number | null;
	batteryMv: number | null;
}

/** More than the condition tells of a node. */
export interface Extra {
	refused: ReadonlyMap<number, { n: number; why: string }>;
	notCured: ReadonlySet<number>;
	drift: ReadonlyMap<number, NoticeFacts>;
}

const OF_CONDITION: Partial<Record<string, NoticeKind>> = {
	silent: 'silent',
	inverted: 'inverted',
	clipped: 'clipped',
	refresh_due: 'refresh_due',
	drifting: 'drifting',
	low_cell: 'low_cell',
	clock_off: 'clock_off'
};
/** The words of detection's doubt (detection/provisional.ts). */
export const REFERENCE_DOUBT = 'reference may hold a vehicle';
/** A single silent node is held back this long: whether it is alone shows only then. */
export const HOLD_BACK_MS = 180_000;
/** Method 4: nothing heard for 3 periods, 5 min at the least. */
const SILENT_LEAST_MS = 300_000;
/** Bay codes that a notice of many names. */
const NAMED = 12;

function kindsOf(node: TroubledNode, extra: Extra): NoticeKind[] {
	const held = [node.condition, ...node.also.split(',')].flatMap(
		(word) => OF_CONDITION[word] ?? []
	);
	if (node.doubtReason === REFERENCE_DOUBT) held.push('reference_vehicle');
	if (extra.refused.has(node.nodeId)) held.push('rejected_frames');
	if (extra.notCured.has(node.nodeId)) held.push('refresh_not_cured');
	return held;
}

function factsOf(node: TroubledNode, kinds: readonly NoticeKind[], extra: Extra): NoticeFacts {
	const refused = extra.refused.get(node.nodeId);
	return {
		bays: [node.bay],
		...(kinds.includes('silent') && node.heardAtMs !== null ? { heardAtMs: node.heardAtMs } : {}),
		...(kinds.includes('low_cell') && node.batteryMv !== null
			? { batteryMv: Math.round(node.batteryMv / 50) * 50 }
			: {}),
		...(refused === undefined ? {} : { refusedWhy: refused.why }),
		...extra.drift.get(node.nodeId)
	};
}

const stormAbout = (siteId: number, storm: Storm): string =>
	`storm:${siteId}:${storm.shared}:${storm.label}`.slice(0, 160);

function stormSubject(siteId: number, storm: Storm, bayOf: ReadonlyMap<number, string>): Subject {
	const codes = storm.members.flatMap(({ nodeId }) => bayOf.get(nodeId) ?? []).sort();
	return {
		about: stormAbout(siteId, storm),
		...{ siteId, nodeId: null, bayId: null, kinds: ['silent'], sinceMs: storm.sinceMs },
		facts: {
			...{ count: storm.members.length, of: storm.of, shared: storm.shared, label: storm.label },
			bays: codes.slice(0, NAMED),
			heardAtMs: storm.sinceMs
		}
	};
}

export interface SiteLook {
	siteId: number;
	nowMs: number;
	nodes: readonly TroubledNode[];
	totals: Totals;
	extra: Extra;
	/** Since when nothing of the whole site is heard; null = it is live. */
	lateSinceMs: number | null;
	heardOf: { heard: number; expected: number };
	/** 'gateway:G2' of storms told already. */
	stormsOpen: ReadonlySet<string>;
	/** Subjects that have an open notice: a silent node among them is not held back again. */
	open: ReadonlySet<string>;
}

/** Everything of a site that needs a notice now, and which nodes are told together with others. */
export function subjectsOf(look: SiteLook): { subjects: Subject[]; folded: Set<string> } {
	const about = (nodeId: number) => `node:${nodeId}`;
	const silent: SilentNode[] = look.nodes
		.filter((node) => kindsOf(node, look.extra).includes('silent'))
		.map(({ nodeId, gateway, network, zone, heardAtMs }) => ({
			...{ nodeId, gateway, network, zone, sinceMs: heardAtMs ?? look.nowMs }
		}));
	// A site not heard at all is one notice: its nodes say nothing more.
	const late = look.lateSinceMs !== null;
	const { storms, singles } = late
		? { storms: [], singles: [] }
		: sortSilent(silent, look.totals, look.stormsOpen);
	const alone = new Set(singles.map(({ nodeId }) => nodeId));
	const bayOf = new Map(look.nodes.map(({ nodeId, bay }) => [nodeId, bay]));
	const folded = new Set<string>();
	const subjects: Subject[] = storms.map((storm) => stormSubject(look.siteId, storm, bayOf));
	for (const node of look.nodes) {
		const all = kindsOf(node, look.extra);
		const held = all.filter((kind) => kind !== 'silent' || alone.has(node.nodeId));
		if (held.length < all.length) folded.add(about(node.nodeId));
		const kinds = held.filter(
			(kind) => kind !== 'silent' || isRipe(node, look, about(node.nodeId))
		);
		if (kinds.length > 0)
			subjects.push({
				...{ about: about(node.nodeId), siteId: look.siteId, kinds },
				...{ nodeId: node.nodeId, bayId: node.bayId, sinceMs: beganMs(node, kinds, look.nowMs) },
				facts: factsOf(node, kinds, look.extra)
			});
	}
	if (look.lateSinceMs !== null) subjects.push(lateSubject(look, look.lateSinceMs));
	return { subjects, folded };
}

const isRipe = (node: TroubledNode, look: SiteLook, about: string): boolean =>
	look.open.has(about) || look.nowMs - (node.heardAtMs ?? 0) >= SILENT_LEAST_MS + HOLD_BACK_MS;

function beganMs(node: TroubledNode, kinds: readonly NoticeKind[], nowMs: number): number {
	if (kinds[0] === 'silent' && node.heardAtMs !== null) return node.heardAtMs;
	if (kinds[0] === 'reference_vehicle' && node.doubtSinceMs !== null) return node.doubtSinceMs;
	return nowMs;
}

const lateSubject = (look: SiteLook, sinceMs: number): Subject => ({
	about: `site:${look.siteId}`,
	...{ siteId: look.siteId, nodeId: null, bayId: null, kinds: ['site_late'], sinceMs },
	facts: { of: look.heardOf.expected }
});
