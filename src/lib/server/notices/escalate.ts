import type { NoticeKind } from '$lib/schemas/notices';
import type { Store } from '$lib/server/store/connect';
import * as wishes from '$lib/server/store/queries/mail-wishes';
import * as notices from '$lib/server/store/queries/notices';
import { transaction } from '$lib/server/store/transaction';
import { deadlineOf } from './deadline';
import { concerns, toBeTold, type Recipient } from './people';

/** Whom a notice that nobody took goes to next. */
export interface Escalation {
	/** 1 the deputies, 2 the admins. */
	stage: 1 | 2;
	people: Recipient[];
}

/**
 * First the deputies that the people told have named, then the admins of the site; a stage without
 * anybody is passed over.
 */
export function escalation(
	notice: { stage: number; kind: NoticeKind; siteId: number | null },
	people: readonly Recipient[]
): Escalation {
	const reach = people.filter((person) => concerns(person, notice.siteId, true));
	if (notice.stage === 0) {
		const told = reach.filter((person) => person.settings.paces[notice.kind] !== 'never');
		const named = new Set(told.flatMap(({ settings }) => settings.deputyId ?? []));
		const deputies = reach.filter(({ id }) => named.has(id));
		if (deputies.length > 0) return { stage: 1, people: deputies };
	}
	return { stage: 2, people: reach.filter(({ role }) => role === 'admin') };
}

const AT_ONCE = 200;

/** Hands on what nobody took in time. Returns how many. */
export async function escalateOverdue(
	store: Store,
	people: readonly Recipient[],
	zoneOf: (siteId: number | null) => string,
	nowMs: number
): Promise<number> {
	return await transaction(store, async ({ sql }) => {
		const rows = await notices.overdue(sql, nowMs, AT_ONCE);
		for (const row of rows) {
			const next = escalation(row, people);
			const zone = zoneOf(row.siteId);
			await notices.escalate(sql, row.id, {
				stage: next.stage,
				deadlineMs: next.stage === 2 ? row.deadlineMs : deadlineOf(row.kind, nowMs, zone)
			});
			const who = next.stage === 1 ? 'deputy' : 'admin';
			await notices.enter(sql, [{ noticeId: row.id, what: 'escalated', detail: who }], nowMs);
			const told = toBeTold(
				next.people,
				row.kind,
				{ id: row.siteId, zone },
				{ nowMs, urged: true }
			);
			await wishes.add(
				sql,
				told.map(({ person, dueMs }) => ({
					...{ personId: person.id, siteId: row.siteId, noticeId: row.id, dueMs },
					...{ what: 'escalated' as const, detail: who }
				})),
				nowMs
			);
		}
		return rows.length;
	});
}
