import { noticesWords } from '$lib/format/messages/notices';
import { instantOf } from '$lib/format/time';
import { SNOOZE_MAX_DAYS, type NoticeAct } from '$lib/schemas/notices';
import type { Store } from '$lib/server/store/connect';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import * as wishes from '$lib/server/store/queries/mail-wishes';
import * as notices from '$lib/server/store/queries/notices';
import { transaction } from '$lib/server/store/transaction';
import { concerns, mayHold, recipientOf, toBeTold, type Recipient } from './people';

const DAY_MS = 86_400_000;

export type ActDone =
	| { ok: true; done: number; /** Of those selected, over or out of reach by now. */ left: number }
	| { ok: false; why: string };

export interface ActBy {
	personId: number;
	act: NoticeAct;
	/** For wall times. */
	zone: string;
	/** Only notices of this site; undefined = any within reach. */
	siteId?: number;
}

const refuse = (why: string): ActDone => ({ ok: false, why });

/**
 * What a person does with notices: everything selected in one transaction, with its history and the
 * mails that follow. Notices that are closed or out of the person's reach are left.
 */
export async function act(store: Store, by: ActBy, nowMs: number): Promise<ActDone> {
	return await transaction(
		store,
		async ({ sql }) => {
			const people = (await mailPeople.all(sql)).map(recipientOf);
			const me = people.find(({ id }) => id === by.personId);
			if (me === undefined || me.role === 'integrator')
				return refuse(noticesWords().refused.integrator);
			const open = await notices.openByIds(sql, by.act.ids);
			const rows = open.filter(
				({ siteId }) =>
					concerns(me, siteId, true) && (by.siteId === undefined || siteId === by.siteId)
			);
			const done = await doIt(sql, { rows, me, people, by, nowMs });
			return typeof done === 'string'
				? refuse(done)
				: { ok: true, done, left: by.act.ids.length - done };
		},
		({ ok }) => ok
	);
}

interface Doing {
	rows: readonly notices.OpenRow[];
	me: Recipient;
	people: readonly Recipient[];
	by: ActBy;
	nowMs: number;
}

/** How many it was done to, or why not. */
async function doIt(sql: Sql, doing: Doing): Promise<number | string> {
	const { act: wanted } = doing.by;
	switch (wanted.act) {
		case 'take':
			return await hold(sql, doing, doing.me);
		case 'hand':
			return await handOn(sql, doing, wanted.to);
		case 'give_back':
			return await giveBack(sql, doing);
		case 'snooze':
			return await snooze(sql, doing, wanted.until);
		case 'comment':
			return await enter(sql, doing, doing.rows, 'comment', wanted.text);
	}
}

async function enter(
	sql: Sql,
	{ me, nowMs }: Doing,
	rows: readonly notices.OpenRow[],
	what: notices.NoticeWhat,
	detail: string
): Promise<number> {
	await notices.enter(
		sql,
		rows.map(({ id }) => ({ noticeId: id, personId: me.id, what, detail })),
		nowMs
	);
	return rows.length;
}

/** Somebody else's stays theirs unless it is handed on; one's own twice is no act. */
async function hold(sql: Sql, doing: Doing, to: Recipient): Promise<number> {
	const { rows, me, nowMs } = doing;
	const own = to.id === me.id;
	const free = rows.filter(({ takenBy }) => (own ? takenBy === null : takenBy !== to.id));
	if (free.length === 0) return 0;
	const ids = free.map(({ id }) => id);
	await notices.hold(sql, ids, { takenBy: to.id, takenAtMs: nowMs });
	await enter(sql, doing, free, own ? 'taken' : 'handed', to.name);
	await tellOthers(sql, doing, free, to);
	return free.length;
}

/** Everybody who was told, and who gets it by being handed on, hears who has it. */
async function tellOthers(
	sql: Sql,
	{ people, me, nowMs, by }: Doing,
	rows: readonly notices.OpenRow[],
	holder: Recipient
): Promise<void> {
	const told = await wishes.toldOf(
		sql,
		rows.map(({ id }) => id)
	);
	const wanted = rows.flatMap((row) => {
		const heard = told.filter((one) => one.noticeId === row.id && one.toldAtMs !== null);
		const ids = new Set(heard.map(({ personId }) => personId).concat(holder.id));
		ids.delete(me.id);
		const who = people.filter(({ id }) => ids.has(id));
		const site = { id: row.siteId, zone: by.zone };
		return toBeTold(who, row.kind, site, { nowMs, urged: true }).map(({ person, dueMs }) => ({
			...{ personId: person.id, siteId: row.siteId, noticeId: row.id, dueMs },
			...{ what: 'taken' as const, detail: holder.name }
		}));
	});
	await wishes.add(sql, wanted, nowMs);
}

async function handOn(sql: Sql, doing: Doing, toId: number): Promise<number | string> {
	const to = doing.people.find(({ id }) => id === toId);
	if (to === undefined) return noticesWords().refused.gone;
	const outside = doing.rows.some(({ siteId }) => !mayHold(to, siteId));
	if (outside) return noticesWords().refused.outside(to.name);
	return await hold(sql, doing, to);
}

async function giveBack(sql: Sql, doing: Doing): Promise<number> {
	const mine = doing.rows.filter(
		({ takenBy }) => takenBy !== null && (takenBy === doing.me.id || doing.me.role === 'admin')
	);
	const ids = mine.map(({ id }) => id);
	if (ids.length > 0) await notices.hold(sql, ids, { takenBy: null, takenAtMs: null });
	return await enter(sql, doing, mine, 'given_back', '');
}

async function snooze(sql: Sql, doing: Doing, until: string): Promise<number | string> {
	const { me, rows, by, nowMs } = doing;
	if (me.role === 'operator') return noticesWords().refused.operatorSnooze;
	const untilMs = instantOf(until, by.zone);
	if (untilMs === null || untilMs <= nowMs) return noticesWords().refused.past;
	if (untilMs > nowMs + SNOOZE_MAX_DAYS * DAY_MS)
		return noticesWords().refused.tooLong(SNOOZE_MAX_DAYS);
	await notices.snooze(
		sql,
		rows.map(({ id }) => id),
		untilMs
	);
	return await enter(sql, doing, rows, 'snoozed', String(untilMs));
}
