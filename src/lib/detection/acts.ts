import { seenConfidence, toldConfidence } from './confidence';
import { close, endClosure } from './closure';
import {
	ask,
	clearDoubt,
	doubtIt,
	enter,
	putBack,
	putBaselineBack,
	remember,
	voidEntry
} from './entries';
import { evidence } from './evidence';
import { startStay, takeVacant } from './judge';
import { accept, startLearning } from './learning';
import { touch, type Group, type Node } from './state';
import type { Act, ActItem } from './types';

const HOUR_MS = 3_600_000;

/** What people and programs did; answers why it was not done, null when it was. */
export function takeAct(g: Group, n: Node, item: ActItem): void {
	const why = doAct(g, n, item, item.act);
	g.out.push({ kind: 'act_done', actId: item.actId, ok: why === null, why });
}

function doAct(g: Group, n: Node, item: ActItem, act: Act): string | null {
	switch (act.kind) {
		case 'place':
			startLearning(g, n, act.preCommissioned, item.atMs);
			return null;
		case 'accept':
			return act.seenEmpty
				? accept(g, n, act.by, item.atMs)
				: 'a quiet field is accepted only by someone who sees the bay empty';
		case 'settle':
			return settle(g, n, item, act.as, act.by);
		case 'undo_settle':
			return undoSettle(g, n, act.settleActId, item.atMs);
		case 'close':
			if (act.toMs <= item.atMs) return 'the closure ends before it begins';
			close(n, act.toMs);
			return null;
		case 'lift':
			if (n.slow.closedUntilMs === 0) return 'the bay is not closed';
			endClosure(g, n, item.atMs);
			return null;
		case 'withdraw':
			withdraw(g, n, item.atMs);
			return null;
		case 'parameters':
			return null;
	}
}

type SettleAs = Extract<Act, { kind: 'settle' }>['as'];

const SETTLED_WORDS: Record<SettleAs, string> = {
	seen_vacant: 'seen free',
	told_vacant: 'told to be free',
	seen_occupied: 'seen taken'
};

function settle(g: Group, n: Node, item: ActItem, as: SettleAs, by: string): string | null {
	const { slow } = n;
	if (slow.reference === null) return 'the node has no accepted quiet field yet';
	const undo = { before: remember(n), doubt: slow.doubt };
	const state = as === 'seen_occupied' ? 'occupied' : 'vacant';
	if (as === 'seen_vacant') takeVacant(n);
	if (as === 'seen_occupied') startStay(n, item.atMs);
	if (as === 'told_vacant') slow.arrival = null;
	slow.aisle = null;
	clearDoubt(n);
	enter(
		g,
		n,
		{
			type: 'settled',
			state,
			atMs: item.atMs,
			uncertaintyS: 0,
			confidence: as === 'told_vacant' ? toldConfidence : seenConfidence,
			evidence: evidence([`${SETTLED_WORDS[as]} by ${by}`])
		},
		item.atMs
	);
	if (as === 'told_vacant') {
		doubtIt(n, 'told free, not seen', item.atMs);
		ask(g, n, 'reading', 'settled by hearsay', item.atMs);
	}
	slow.settle = { actId: item.actId, atMs: item.atMs, as, ...undo, entries: slow.entries };
	return null;
}

function undoSettle(g: Group, n: Node, settleActId: number, atMs: number): string | null {
	const { slow } = n;
	const undo = slow.settle;
	if (undo?.actId !== settleActId) return 'there is no such settlement to take back';
	if (atMs - undo.atMs > n.params.settleUndoH * HOUR_MS) return 'it is too long ago to take back';
	if (slow.entries !== undo.entries) return 'the bay has changed since';
	voidEntry(g, n, 'settled', undo.atMs, atMs, 'taken back');
	putBack(n, undo.before);
	putBaselineBack(n, undo.before);
	slow.doubt = undo.doubt;
	slow.settle = null;
	touch(n);
	return null;
}

function withdraw(g: Group, n: Node, atMs: number): void {
	const { slow } = n;
	if (slow.state !== 'unknown') {
		enter(
			g,
			n,
			{
				type: 'unknown',
				state: 'unknown',
				atMs,
				uncertaintyS: 0,
				confidence: 0,
				evidence: evidence(['the node was withdrawn'])
			},
			atMs
		);
	}
	slow.unknownWhy = 'new';
	slow.learning = false;
	slow.reference = null;
	slow.candidate = null;
	slow.arrival = null;
	touch(n);
}
