import type { Instance } from '$lib/server/api/instance';
import { mailSheetWords } from '$lib/format/messages/mail-sheets';
import { readToken } from '$lib/server/outbox/link-token';
import { factsOf, headOf } from '$lib/server/outbox/letter/item';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import * as letters from '$lib/server/store/queries/notice-letter';
import { act } from './acts';
import { recipientOf } from './people';
import { saveSettings } from './settings';

type App = Pick<Instance, 'store' | 'secret' | 'nudgeNotices'>;

function whyNot(reason: 'not_ours' | 'expired'): string {
	const said = mailSheetWords().take;
	return reason === 'expired' ? said.expired : said.notOurs;
}

/** What the page behind 'I take it' shows before anything is done. */
export async function acknowledgeView(app: App, token: string | null, nowMs: number) {
	const read = readToken(app.secret, 'acknowledge', token, nowMs);
	if (!read.ok) return { ok: false as const, why: whyNot(read.reason) };
	if (read.link.does !== 'acknowledge') return { ok: false as const, why: whyNot('not_ours') };
	const person = await mailPeople.byId(app.store.pool, read.link.personId);
	if (person === null) return { ok: false as const, why: mailSheetWords().take.nobody };
	const rows = await letters.byIds(app.store.pool, read.link.noticeIds);
	return {
		...{ ok: true as const, token: token ?? '', name: person.name },
		notices: rows.map((row) => ({
			id: row.id,
			text: headOf(
				{ row, facts: factsOf(row), what: 'opened', detail: '', zone: row.timezone ?? 'UTC' },
				nowMs
			),
			note:
				row.closedAtMs !== null
					? mailSheetWords().take.over
					: row.takerName === null
						? null
						: mailSheetWords().take.has(row.takerName)
		}))
	};
}

export type Acknowledged = { ok: true; done: number } | { ok: false; why: string };

/** Takes what the link names, as the person it was mailed to, as far as their role and sites still reach. */
export async function acknowledge(
	app: App,
	token: string | null,
	nowMs: number
): Promise<Acknowledged> {
	const read = readToken(app.secret, 'acknowledge', token, nowMs);
	if (!read.ok) return { ok: false, why: whyNot(read.reason) };
	if (read.link.does !== 'acknowledge') return { ok: false, why: whyNot('not_ours') };
	const { personId, noticeIds } = read.link;
	const done = await act(
		app.store,
		{ personId, act: { act: 'take', ids: noticeIds }, zone: 'UTC' },
		nowMs
	);
	if (!done.ok) return done;
	app.nudgeNotices();
	return { ok: true, done: done.done };
}

async function holderOf(app: App, token: string | null, nowMs: number) {
	const read = readToken(app.secret, 'unsubscribe', token, nowMs);
	if (!read.ok || read.link.does !== 'unsubscribe') return null;
	const row = await mailPeople.byId(app.store.pool, read.link.personId);
	return row === null ? null : recipientOf(row);
}

export async function unsubscribeView(app: App, token: string | null, nowMs: number) {
	const person = await holderOf(app, token, nowMs);
	return {
		name: person?.name ?? null,
		off: person?.settings.off ?? false,
		action: `?token=${encodeURIComponent(token ?? '')}`
	};
}

/** Once or many times: afterwards nothing of notices is mailed to the person. */
export async function unsubscribe(app: App, token: string | null, nowMs: number): Promise<boolean> {
	const person = await holderOf(app, token, nowMs);
	if (person === null) return false;
	if (!person.settings.off)
		await saveSettings(app.store, person, { ...person.settings, off: true }, nowMs);
	return true;
}
