import { compose } from '$lib/server/outbox/letter/letter';
import { factsOf, type Item } from '$lib/server/outbox/letter/item';
import { driftPlot } from '$lib/server/outbox/letter/drift-plot';
import { drawHtml } from '$lib/server/outbox/letter/html';
import { MARK_CID, markPng } from '$lib/server/outbox/letter/mark';
import { drawText } from '$lib/server/outbox/letter/text';
import { enqueueMail, newMessageId } from '$lib/server/outbox/enqueue';
import { ACKNOWLEDGE_DAYS, makeToken } from '$lib/server/outbox/link-token';
import type { Secret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as people from '$lib/server/store/queries/mail-people';
import * as wishes from '$lib/server/store/queries/mail-wishes';
import { unexplained } from '$lib/server/store/queries/notice-drift';
import * as letters from '$lib/server/store/queries/notice-letter';
import { transaction, type Tx } from '$lib/server/store/transaction';
import { speaking } from '$lib/server/auth/language';
import { isLanguage } from '$lib/format/messages';
import { mailWords } from '$lib/format/messages/mail';
import { LIMITS_MG } from './drift-facts';
import { concerns, recipientOf, type Recipient } from './people';

const MIN_MS = 60_000;
const DAY_MS = 24 * 60 * MIN_MS;
/** At most one mail a site and person in this time, holding all that is new. */
const PAUSE_MS = 15 * MIN_MS;
/** Takings are told in one mail when somebody takes many one after the other. */
const TAKING_MS = 20_000;
const PLOT_DAYS = 14;
const PAIRS_AT_ONCE = 100;

export interface ComposeParts {
	store: Store;
	secret: Secret;
	/** Where links lead. */
	origin: string;
}

type Pair = { personId: number; siteId: number | null };

/** Turns what is due into mails; returns how many mails were put into the outbox. */
export async function composeDue(parts: ComposeParts, nowMs: number): Promise<number> {
	const pairs = await wishes.duePairs(parts.store.pool, nowMs, PAIRS_AT_ONCE);
	let mails = 0;
	for (const pair of pairs) mails += await composeOne(parts, pair, nowMs);
	return mails;
}

/**
 * All that is due to one person of one site becomes one mail: the wishes are done and the mail stands in
 * the outbox, or neither.
 */
async function composeOne(parts: ComposeParts, pair: Pair, nowMs: number): Promise<number> {
	return await transaction(parts.store, async (tx) => {
		const due = await wishes.takeDue(tx.sql, pair, nowMs);
		if (due.length === 0) return 0;
		const person = await people.byId(tx.sql, pair.personId);
		const to = person === null ? null : recipientOf(person);
		const rows = await letters.byIds(tx.sql, [...new Set(due.map(({ noticeId }) => noticeId))]);
		const told = to !== null && !to.settings.off && concerns(to, pair.siteId, true);
		const items = told ? itemsOf(due, rows) : [];
		const waitMs = items.length === 0 ? null : await waitOf(tx.sql, pair, due, nowMs);
		const ids = due.map(({ id }) => id);
		if (waitMs !== null) {
			await wishes.postpone(tx.sql, ids, waitMs);
			return 0;
		}
		const messageId =
			items.length === 0 || to === null ? null : await mailOf(parts, tx, { to, items }, nowMs);
		await wishes.done(tx.sql, ids, messageId, nowMs);
		return messageId === null ? 0 : 1;
	});
}

/** Until when it must wait so that a site sends at most one mail of news in 15 min; null = now. */
async function waitOf(
	sql: Sql,
	pair: Pair,
	due: readonly wishes.WishRow[],
	nowMs: number
): Promise<number | null> {
	const newest = Math.max(...due.map(({ wishedAtMs }) => wishedAtMs));
	const isNews = due.some(({ what }) => what === 'opened' || what === 'worse');
	if (!isNews) {
		const takings = due.every(({ what }) => what === 'taken');
		return takings && nowMs - newest < TAKING_MS ? newest + TAKING_MS : null;
	}
	const lastMs = await wishes.lastNewsMs(sql, pair);
	return lastMs !== null && nowMs - lastMs < PAUSE_MS ? lastMs + PAUSE_MS : null;
}

const RANK = ['escalated', 'closed', 'taken', 'worse', 'opened'] as const;

/** One item a notice; what is over before it was told is not told. */
function itemsOf(due: readonly wishes.WishRow[], rows: readonly letters.NoticeRow[]): Item[] {
	return rows.flatMap((row) => {
		const own = due.filter(({ noticeId }) => noticeId === row.id);
		const wish = RANK.map((what) => own.findLast((one) => one.what === what)).find(Boolean);
		if (wish === undefined) return [];
		const unheard = own.some(({ what }) => what === 'opened');
		if (row.closedAtMs !== null && (unheard || wish.what !== 'closed')) return [];
		const what = unheard && wish.what !== 'escalated' ? 'opened' : wish.what;
		return [{ row, facts: factsOf(row), what, detail: wish.detail, zone: row.timezone ?? 'UTC' }];
	});
}

/** Written in the reader's language and zone. */
async function mailOf(
	parts: ComposeParts,
	{ db, sql }: Tx,
	{ to, items }: { to: Recipient; items: readonly Item[] },
	nowMs: number
): Promise<string> {
	const messageId = newMessageId();
	const token = makeToken(parts.secret, { does: 'unsubscribe', personId: to.id });
	const unsubscribeUrl = `${parts.origin}/unsubscribe?token=${token}`;
	const language = isLanguage(to.language) ? to.language : 'en';
	const drawn = await speaking(
		language,
		async () => await draw(parts, sql, { to, items, unsubscribeUrl }, nowMs)
	);
	return await enqueueMail(
		db,
		parts.secret,
		{
			...{ to: to.email, messageId, personId: to.id, unsubscribeUrl, ...drawn },
			references: await wishes.thread(sql, to.id, {
				nodeIds: items.flatMap(({ row }) => row.nodeId ?? []),
				noticeIds: items.map(({ row }) => row.id)
			}),
			demo: to.demo || items.some(({ row }) => row.siteDemo === 1)
		},
		nowMs
	);
}

/** Subject, text and HTML with the pictures that it shows. */
async function draw(
	{ secret, origin }: ComposeParts,
	sql: Sql,
	of: { to: Recipient; items: readonly Item[]; unsubscribeUrl: string },
	nowMs: number
) {
	const { to, items, unsubscribeUrl } = of;
	const [first] = items;
	const plot = items.length === 1 && first !== undefined ? await plotOf(sql, first, nowMs) : null;
	const plotCid = `drift-${first?.row.id ?? 0}@lodekeep`;
	const mark = await markPng();
	const letter = compose({
		...{ to, items, nowMs, origin, unsubscribeUrl },
		site: siteOf(first?.row),
		zone: to.timezone ?? first?.zone ?? 'UTC',
		acknowledgeUrl: acknowledgeUrl(secret, origin, to, items, nowMs),
		plotCid: plot === null ? null : plotCid,
		markCid: mark === null ? null : MARK_CID
	});
	const inline = [
		...(mark === null ? [] : [{ cid: MARK_CID, name: 'lodekeep.png', pngBase64: mark }]),
		...(plot === null
			? []
			: [{ cid: plotCid, name: 'drift.png', pngBase64: plot.toString('base64') }])
	];
	return { subject: letter.subject, text: drawText(letter), html: drawHtml(letter), inline };
}

const siteOf = (row: letters.NoticeRow | undefined) =>
	row?.site == null ? null : { slug: row.site, name: row.siteName ?? row.site };

/** Only what nobody has can be taken, and only by who may hold it. */
function acknowledgeUrl(
	secret: Secret,
	origin: string,
	to: Recipient,
	items: readonly Item[],
	nowMs: number
): string | null {
	if (to.role === 'integrator') return null;
	const noticeIds = items
		.filter(({ row, what }) => row.closedAtMs === null && row.takenBy === null && what !== 'closed')
		.map(({ row }) => row.id);
	if (noticeIds.length === 0) return null;
	const expiresAtMs = nowMs + ACKNOWLEDGE_DAYS * DAY_MS;
	const token = makeToken(secret, { does: 'acknowledge', personId: to.id, noticeIds, expiresAtMs });
	return `${origin}/acknowledge?token=${token}`;
}

const PLOTTED = /drifting|refresh_due|inverted|refresh_not_cured/;

async function plotOf(sql: Sql, { row, facts }: Item, nowMs: number): Promise<Buffer | null> {
	if (row.nodeId === null || !PLOTTED.test(row.kinds)) return null;
	const hours = await unexplained(sql, [row.nodeId], nowMs - PLOT_DAYS * DAY_MS);
	const limitsMg = facts.limitsMg ?? [LIMITS_MG.drifting, LIMITS_MG.due];
	return driftPlot(hours.get(row.nodeId) ?? [], limitsMg, nowMs, mailWords().plotNow);
}
