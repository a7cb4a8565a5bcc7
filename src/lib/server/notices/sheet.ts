import {
	daysLeft,
	driftLine,
	howWords,
	noticeWords,
	stormSentence
} from '$lib/format/notice-words';
import { noticesWords } from '$lib/format/messages/notices';
import { moment } from '$lib/format/time';
import { plain } from '$lib/format/words';
import type { NoticeFacts } from '$lib/schemas/notices';
import type { EndedView, NoticeSheetView, NoticeView } from '$lib/schemas/notice-sheet';
import { personIdOf, type Reach } from '$lib/server/auth/reach';
import type { Store } from '$lib/server/store/connect';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import * as wishes from '$lib/server/store/queries/mail-wishes';
import * as letters from '$lib/server/store/queries/notice-letter';
import { factsOf } from '$lib/server/outbox/letter/item';
import { groupNotices } from './group';
import { kindsOf } from './kinds';
import { mayHold, recipientOf } from './people';

/** More than these at once is a storm of storms: the nearest deadlines are shown. */
const SHOWN = 500;
const ENDED = 200;
const ENDED_MS = 7 * 86_400_000;
const ALL_SITES = 0;

type Told = Awaited<ReturnType<typeof wishes.toldOf>>;

/** Everything the sheet shows to one person: of one site, or of all within reach. */
export async function sheetOf(
	store: Store,
	reach: Reach,
	siteId: number | null,
	nowMs: number
): Promise<NoticeSheetView> {
	const sql = store.pool;
	const me = personIdOf(reach);
	const within = {
		sites: siteId === null ? reach.sites : new Set([siteId]),
		installation: siteId === null && reach.role === 'admin'
	};
	const rows = await letters.openWithin(sql, within, SHOWN + 1);
	const shown = rows.slice(0, SHOWN);
	const ids = shown.map(({ id }) => id);
	const [told, entries, ended, people] = await Promise.all([
		wishes.toldOf(sql, ids),
		letters.entries(sql, ids),
		letters.closedWithin(sql, within, nowMs - ENDED_MS, ENDED),
		mailPeople.all(sql)
	]);
	const lastMs =
		me === null
			? null
			: await letters.swapLook(sql, { personId: me, siteId: siteId ?? ALL_SITES, atMs: nowMs });
	const counts = await letters.since(sql, within, lastMs ?? 0);
	const heard = byNotice(told);
	const done = byNotice(entries);
	const views = shown.map((row) =>
		viewOf(row, { told: heard.get(row.id) ?? [], entries: done.get(row.id) ?? [], me, nowMs })
	);
	return {
		...{ nowMs, since: { atMs: lastMs, ...counts }, groups: groupNotices(views) },
		...{ ended: ended.map((row) => endedView(row, nowMs)), more: rows.length > SHOWN },
		people: people
			.map(recipientOf)
			.filter((person) => person.id !== me && mayHold(person, siteId))
			.map(({ id, name }) => ({ id, name })),
		maySnooze: reach.role !== 'operator'
	};
}

function byNotice<T extends { noticeId: number }>(rows: readonly T[]): Map<number, T[]> {
	const all = new Map<number, T[]>();
	for (const row of rows) {
		const own = all.get(row.noticeId);
		if (own === undefined) all.set(row.noticeId, [row]);
		else own.push(row);
	}
	return all;
}

interface More {
	told: Told;
	entries: letters.EntryRow[];
	me: number | null;
	nowMs: number;
}

function viewOf(row: letters.NoticeRow, { told, entries, me, nowMs }: More): NoticeView {
	const facts = factsOf(row);
	const words = noticeWords(row.kind);
	const left = daysLeft(facts.daysLeftLo, facts.daysLeftHi);
	return {
		...{ id: row.id, kind: row.kind, word: words.word, what: whatOf(row, facts, nowMs) },
		...{ href: hrefOf(row), zone: row.zoneName ?? row.zone, site: siteOf(row) },
		...{ sinceMs: row.sinceMs, deadlineMs: row.deadlineMs, stage: row.stage },
		otherwise: left === null ? words.otherwise : `${words.otherwise}: ${left}`,
		also: kindsOf(row.kinds)
			.filter((kind) => kind !== row.kind)
			.map((kind) => noticeWords(kind).word),
		...{ awaitsProof: row.awaitsProof === 1, times: row.times },
		cause: causeOf(facts),
		holder:
			row.takenBy === null
				? null
				: {
						...{ name: row.takerName ?? noticesWords().aPerson, initials: row.takerInitials ?? '' },
						mine: row.takenBy === me
					},
		snoozedUntilMs: (row.snoozedUntilMs ?? 0) > nowMs ? row.snoozedUntilMs : null,
		told: told.map(({ name, toldAtMs, dueMs }) => ({ name, atMs: toldAtMs, dueMs })),
		entries: entries.map((entry) => ({
			...{ atMs: entry.atMs, by: entry.initials },
			text: entryWords(entry, row.timezone ?? 'UTC', nowMs)
		}))
	};
}

const siteOf = (row: letters.NoticeRow): NoticeView['site'] =>
	row.site === null
		? null
		: { slug: row.site, name: row.siteName ?? row.site, timezone: row.timezone ?? 'UTC' };

/** 'B07', or for many the sentence of what they share. */
function whatOf(row: letters.NoticeRow, facts: NoticeFacts, nowMs: number): string {
	if (row.bay !== null) return row.bay;
	if (row.kind === 'silent')
		return stormSentence(moment(row.sinceMs, row.timezone ?? 'UTC', nowMs), facts);
	if (row.kind === 'mail_failing') return facts.address ?? noticesWords().anAddress;
	return row.siteName ?? 'Lodekeep';
}

function hrefOf(row: letters.NoticeRow): string | null {
	if (row.site === null) return row.kind === 'mail_failing' ? '/mail' : null;
	if (row.bay !== null) return `/sites/${row.site}/bays/${encodeURIComponent(row.bay)}`;
	return `/sites/${row.site}/plan`;
}

function causeOf(facts: NoticeFacts): string | null {
	if (facts.reply !== undefined) return facts.reply;
	const said = noticesWords();
	if (facts.refusedWhy !== undefined) return said.framesRefused(plain(facts.refusedWhy));
	return driftLine(facts) ?? (facts.batteryMv === undefined ? null : said.cell(facts.batteryMv));
}

const list = (kinds: string): string =>
	kindsOf(kinds)
		.map((kind) => noticeWords(kind).word)
		.join(', ');

function entryWords({ what, detail }: letters.EntryRow, zone: string, nowMs: number): string {
	const said = noticesWords().entry;
	const words: Record<string, () => string> = {
		opened: () => said.opened(list(detail)),
		reopened: () => {
			const [times = '', kinds = ''] = detail.split(':');
			return said.reopened(times, list(kinds));
		},
		kind: () => said.kind(list(detail)),
		awaits_proof: () => said.awaitsProof,
		taken: () => said.taken(detail),
		handed: () => said.handed(detail),
		given_back: () => said.givenBack,
		snoozed: () => said.snoozed(moment(Number(detail), zone, nowMs)),
		comment: () => detail,
		escalated: () => (detail === 'deputy' ? said.deputy : said.admins),
		closed: () => said.closed(howWords(detail))
	};
	return words[what]?.() ?? plain(what);
}

const endedView = (row: letters.NoticeRow, nowMs: number): EndedView => ({
	...{ id: row.id, word: noticeWords(row.kind).word, what: whatOf(row, factsOf(row), nowMs) },
	...{
		siteName: row.siteName,
		timezone: row.timezone ?? 'UTC',
		closedAtMs: row.closedAtMs ?? nowMs
	},
	how: howWords(row.closedHow ?? 'healed'),
	healed: row.closedHow === 'healed'
});
