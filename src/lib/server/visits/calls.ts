import type { NoticeKind } from '$lib/schemas/notices';
import type { VisitCause } from '$lib/schemas/visit-kinds';
import { HEAL_BY_THEMSELVES, RULES } from './params';

/** An open notice of a node, with what it told since when. */
export interface Calling {
	bayId: number;
	nodeId: number;
	kinds: readonly NoticeKind[];
	/** Its history, oldest first. */
	entries: readonly { atMs: number; kinds: readonly NoticeKind[] }[];
}

export interface Held {
	id: number;
	bayId: number;
	cause: VisitCause;
	endedAtMs: number | null;
}

export interface Calls {
	ask: { bayId: number; nodeId: number; cause: VisitCause }[];
	/** Ids of causes that hold no more. */
	over: number[];
}

/** Since when a kind holds without a break. */
function sinceMs(kind: NoticeKind, { entries }: Calling): number {
	let since = Infinity;
	for (const entry of entries)
		if (!entry.kinds.includes(kind)) since = Infinity;
		else since = Math.min(since, entry.atMs);
	return since;
}

/** What the open notices of a site ask for and is not asked yet, and which causes of rules are over. */
export function callsOf(notices: readonly Calling[], held: readonly Held[], nowMs: number): Calls {
	const ask = notices.flatMap((notice) =>
		RULES.filter(
			({ kind, afterMs }) => notice.kinds.includes(kind) && nowMs - sinceMs(kind, notice) >= afterMs
		)
			.filter(({ cause }) => !held.some((h) => holds(h, notice.bayId, cause)))
			.map(({ cause }) => ({ bayId: notice.bayId, nodeId: notice.nodeId, cause }))
	);
	const stillTold = (bayId: number, cause: VisitCause) =>
		notices.some(
			(n) => n.bayId === bayId && RULES.some((r) => r.cause === cause && n.kinds.includes(r.kind))
		);
	const over = held
		.filter(({ endedAtMs, cause }) => endedAtMs === null && HEAL_BY_THEMSELVES.includes(cause))
		.filter(({ bayId, cause }) => !stillTold(bayId, cause))
		.map(({ id }) => id);
	return { ask, over };
}

const holds = (held: Held, bayId: number, cause: VisitCause): boolean =>
	held.bayId === bayId && held.cause === cause && held.endedAtMs === null;
