import type { NoticeKind } from '$lib/schemas/notices';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as wishes from '$lib/server/store/queries/mail-wishes';
import * as notices from '$lib/server/store/queries/notices';
import { deadlineOf } from './deadline';
import { rankOf } from './kinds';
import { toBeTold, type Recipient } from './people';
import type { OpenNotice, Step } from './reconcile';

export interface Ground {
	siteId: number | null;
	/** Of the site; UTC for the installation. */
	zone: string;
	people: readonly Recipient[];
	nowMs: number;
}

type Stored = OpenNotice & Pick<notices.OpenRow, 'deadlineMs' | 'stage' | 'takenBy'>;
type Opening = Extract<Step, { do: 'open' }>;
type Reopening = Extract<Step, { do: 'reopen' }>;
type Changing = Extract<Step, { do: 'change' }>;
type Closing = Extract<Step, { do: 'close' }>;

/** People who waited for these are told of their end; of the rest the sheet tells. */
const ENDS_MAILED: readonly NoticeKind[] = ['site_late', 'refresh_due'];

export interface Applied {
	opened: number;
	closed: number;
	wishes: number;
}

/** Writes steps, their history and the wishes for mail that follow, in the caller's transaction. */
export async function apply(
	sql: Sql,
	ground: Ground,
	steps: readonly Step[],
	open: ReadonlyMap<number, Stored>
): Promise<Applied> {
	const opening = steps.filter((step): step is Opening => step.do === 'open');
	const reopening = steps.filter((step): step is Reopening => step.do === 'reopen');
	const changing = steps.filter((step): step is Changing => step.do === 'change');
	const closing = steps.filter((step): step is Closing => step.do === 'close');
	const wanted = [
		...(await applyOpenings(sql, ground, opening)),
		...(await applyReturns(sql, ground, reopening)),
		...(await applyChanges(sql, ground, changing, open)),
		...(await applyEnds(sql, ground, closing))
	];
	await wishes.add(sql, wanted, ground.nowMs);
	return {
		opened: opening.length + reopening.length,
		closed: closing.length,
		wishes: wanted.length
	};
}

/** Of one kind everybody's due time is worked out once, however many notices. */
function tellers(ground: Ground) {
	const known = new Map<NoticeKind, ReturnType<typeof toBeTold>>();
	return (kind: NoticeKind) => {
		const site = { id: ground.siteId, zone: ground.zone };
		const told = known.get(kind) ?? toBeTold(ground.people, kind, site, ground);
		known.set(kind, told);
		return told;
	};
}

async function applyOpenings(
	sql: Sql,
	ground: Ground,
	steps: readonly Opening[]
): Promise<wishes.NewWish[]> {
	const told = tellers(ground);
	const ids = await notices.insert(
		sql,
		steps.map(({ subject, kind, kinds }) => ({
			...{ siteId: subject.siteId, nodeId: subject.nodeId, bayId: subject.bayId },
			...{ about: subject.about, kind, kinds: kinds.join(), sinceMs: subject.sinceMs },
			awaitsProof: kinds.includes('refresh_due'),
			openedAtMs: ground.nowMs,
			deadlineMs: deadlineOf(kind, ground.nowMs, ground.zone),
			facts: JSON.stringify(subject.facts)
		}))
	);
	await notices.enter(
		sql,
		steps.map(({ kinds }, i) => ({ noticeId: ids[i] ?? 0, what: 'opened', detail: kinds.join() })),
		ground.nowMs
	);
	return steps.flatMap(({ kind, subject }, i) =>
		told(kind)
			// Nobody is mailed of their own address that cannot be reached.
			.filter(({ person }) => subject.about !== `mail:${person.id}`)
			.map(({ person, dueMs }) => ({
				...{ personId: person.id, siteId: subject.siteId, noticeId: ids[i] ?? 0, dueMs },
				what: 'opened' as const
			}))
	);
}

/**
 * Somebody who knows of it is not mailed again, unless they were told that it is over or it is worse now. The
 * time that it was over does not count against who has to take it.
 */
async function applyReturns(
	sql: Sql,
	ground: Ground,
	steps: readonly Reopening[]
): Promise<wishes.NewWish[]> {
	const told = tellers(ground);
	const known = await wishes.lastTold(
		sql,
		steps.map(({ healed }) => healed.id)
	);
	const wanted: wishes.NewWish[] = [];
	for (const { subject, healed, kind, kinds } of steps) {
		const worse = rankOf(kind) < rankOf(healed.kind);
		const fresh = deadlineOf(kind, ground.nowMs, ground.zone);
		await notices.reopen(sql, healed.id, {
			...{ kind, kinds: kinds.join(), awaitsProof: kinds.includes('refresh_due') },
			...{ sinceMs: subject.sinceMs, facts: JSON.stringify(subject.facts) },
			deadlineMs: Math.min(fresh, healed.deadlineMs + ground.nowMs - healed.closedAtMs)
		});
		const know = (personId: number) =>
			!worse &&
			known.some(
				(one) => one.noticeId === healed.id && one.personId === personId && one.what !== 'closed'
			);
		for (const { person, dueMs } of told(kind))
			if (!know(person.id) && subject.about !== `mail:${person.id}`)
				wanted.push({
					...{ personId: person.id, siteId: subject.siteId, noticeId: healed.id, dueMs },
					what: 'opened'
				});
	}
	await notices.enter(
		sql,
		steps.map(({ healed, kinds }) => ({
			...{ noticeId: healed.id, what: 'reopened' as const },
			detail: `${healed.times + 1}:${kinds.join()}`
		})),
		ground.nowMs
	);
	return wanted;
}

async function applyChanges(
	sql: Sql,
	ground: Ground,
	steps: readonly Changing[],
	open: ReadonlyMap<number, Stored>
): Promise<wishes.NewWish[]> {
	const told = tellers(ground);
	const wanted: wishes.NewWish[] = [];
	for (const step of steps) {
		const before = open.get(step.notice.id);
		const fresh = deadlineOf(step.kind, ground.nowMs, ground.zone);
		await notices.change(sql, step.notice.id, {
			...{ kind: step.kind, kinds: step.kinds.join(), awaitsProof: step.awaitsProof },
			facts: step.facts === null ? null : JSON.stringify(step.facts),
			// Worse cannot mean more time.
			deadlineMs: step.worse
				? Math.min(before?.deadlineMs ?? fresh, fresh)
				: (before?.deadlineMs ?? fresh),
			stage: step.worse ? 0 : (before?.stage ?? 0)
		});
		if (step.worse)
			for (const { person, dueMs } of told(step.kind))
				wanted.push({
					...{ personId: person.id, siteId: ground.siteId, noticeId: step.notice.id, dueMs },
					...{ what: 'worse', detail: step.notice.kind }
				});
	}
	const other = steps.filter(({ notice, kinds }) => notice.kinds.join() !== kinds.join());
	await notices.enter(
		sql,
		other.map(({ notice, kinds, onlyProof }) => ({
			...{ noticeId: notice.id, detail: kinds.join() },
			what: onlyProof ? 'awaits_proof' : 'kind'
		})),
		ground.nowMs
	);
	return wanted;
}

async function applyEnds(
	sql: Sql,
	ground: Ground,
	steps: readonly Closing[]
): Promise<wishes.NewWish[]> {
	for (const how of ['healed', 'proved', 'removed', 'folded'] as const) {
		const ids = steps.filter((step) => step.how === how).map(({ notice }) => notice.id);
		await notices.close(sql, ids, how, ground.nowMs);
	}
	const entries = steps.map(({ notice, how }) => ({
		...{ noticeId: notice.id, what: 'closed' as const, detail: how }
	}));
	await notices.enter(sql, entries, ground.nowMs);
	const mailed = steps.filter(
		({ notice, how }) => how !== 'folded' && notice.kinds.some((k) => ENDS_MAILED.includes(k))
	);
	const told = await wishes.toldOf(
		sql,
		mailed.map(({ notice }) => notice.id)
	);
	const waiting = told.filter(({ toldAtMs }) => toldAtMs !== null);
	return waiting.flatMap(({ noticeId, personId }) => {
		const step = mailed.find(({ notice }) => notice.id === noticeId);
		const who = ground.people.filter(({ id }) => id === personId);
		if (step === undefined) return [];
		const site = { id: ground.siteId, zone: ground.zone };
		return toBeTold(who, step.notice.kind, site, { ...ground, urged: true }).map(({ dueMs }) => ({
			...{ personId, siteId: ground.siteId, noticeId, dueMs },
			...{ what: 'closed' as const, detail: step.how }
		}));
	});
}
