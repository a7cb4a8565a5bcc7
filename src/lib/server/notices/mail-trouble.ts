import type { Store } from '$lib/server/store/connect';
import * as outbox from '$lib/server/store/queries/outbox';
import * as notices from '$lib/server/store/queries/notices';
import { transaction } from '$lib/server/store/transaction';
import { apply, type Applied } from './apply';
import { healedLately } from './healed';
import { kindsOf } from './kinds';
import type { Recipient } from './people';
import { reconcile, type Subject } from './reconcile';

/** Refusals and given-up mails older than this say nothing of now. */
const REMEMBERED_MS = 7 * 86_400_000;

/** People whose mail was given up or refused for good and who got none since: one notice each, for the admins. */
export async function lookAtMail(
	store: Store,
	people: readonly Recipient[],
	nowMs: number
): Promise<Applied> {
	return await transaction(store, async ({ sql }) => {
		const rows = await notices.open(sql, null);
		const failing = await outbox.failing(sql, nowMs - REMEMBERED_MS);
		if (rows.length === 0 && failing.length === 0) return { opened: 0, closed: 0, wishes: 0 };
		const subjects = failing.map((one): Subject => ({
			...{ about: `mail:${one.personId}`, siteId: null, nodeId: null, bayId: null },
			...{ kinds: ['mail_failing'], sinceMs: one.sinceMs },
			facts: { address: one.email, reply: one.error, count: one.mails }
		}));
		const open = rows.map((row) => ({
			...row,
			...{ kinds: kindsOf(row.kinds), awaitsProof: false }
		}));
		const nothing = {
			...{ provedAtMs: new Map(), gone: new Set<string>(), folded: new Set<string>() },
			healed: await healedLately(sql, null, nowMs)
		};
		const steps = reconcile(open, subjects, nothing);
		const ground = { siteId: null, zone: 'UTC', people, nowMs };
		return await apply(sql, ground, steps, new Map(open.map((row) => [row.id, row])));
	});
}
