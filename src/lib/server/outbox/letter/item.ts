import {
	daysLeft,
	driftLine,
	howWords,
	noticeWords,
	stormSentence
} from '$lib/format/notice-words';
import { named } from '$lib/format/messages';
import { mailWords } from '$lib/format/messages/mail';
import { noticesWords } from '$lib/format/messages/notices';
import { moment, zoneName } from '$lib/format/time';
import { plain } from '$lib/format/words';
import { noticeFacts, type NoticeFacts } from '$lib/schemas/notices';
import type { NoticeRow } from '$lib/server/store/queries/notice-letter';

export type What = 'opened' | 'worse' | 'escalated' | 'taken' | 'closed';

/** One notice as a mail tells it. */
export interface Item {
	row: NoticeRow;
	facts: NoticeFacts;
	what: What;
	/** Of the wish: the former kind, 'deputy', who took it, how it ended. */
	detail: string;
	zone: string;
}

/** A line of the drawing's list: what is named, in words, with an address where there is one. */
export interface Line {
	label: string;
	value: string;
	href?: string;
}

export function factsOf(row: Pick<NoticeRow, 'facts'>): NoticeFacts {
	const parsed = noticeFacts.safeParse(JSON.parse(row.facts));
	return parsed.success ? parsed.data : {};
}

/** 'B07' for a node, else the site; a storm its sentence. */
export function headOf({ row, facts, zone }: Item, nowMs: number): string {
	const since = moment(row.sinceMs, zone, nowMs);
	const site = row.siteName ?? '';
	if (row.bay !== null) {
		const left = daysLeft(facts.daysLeftLo, facts.daysLeftHi);
		return `${row.bay}, ${site}: ${noticeWords(row.kind).word}${left === null ? '' : `, ${left}`}`;
	}
	if (row.kind === 'silent') return `${site}: ${stormSentence(since, facts)}`;
	if (row.kind === 'site_late') return mailWords().siteLate(site, since);
	if (row.kind === 'mail_failing') return mailWords().mailFailing(facts.address ?? '');
	return `${site}: ${noticeWords(row.kind).word}`;
}

/** What has happened to a notice that was told before; null for a new one. */
export function newsOf({ what, detail, row }: Item): string | null {
	const said = mailWords();
	if (what === 'taken') return said.hasItNow(detail);
	if (what === 'closed') return said.over(howWords(detail));
	if (what === 'escalated') return detail === 'deputy' ? said.deputy : said.admins;
	if (what === 'worse') return said.was(noticeWords(detail).word);
	if (row.takerName !== null) return said.hasIt(row.takerName);
	return row.times > 1 ? said.again(row.times) : null;
}

const clock = (min: number): string =>
	`${String(Math.floor(min / 60)).padStart(2, '0')}:${String(min % 60).padStart(2, '0')}`;

/** Kinds that a film refresh cures. */
export const PULSED = /inverted|refresh_due/;

/** Whether the site's rule will do it in the coming quiet hours. */
function tonight({ row, facts }: Item): string | null {
	const said = mailWords().tonight;
	if (!PULSED.test(row.kinds)) return null;
	if (row.refreshState === 'asked') return said.asked;
	if (row.refreshState !== null) return said.underWay;
	if (row.scheduleOn !== 1) return said.off;
	const taken = (row.scheduleReasons ?? '').split(',');
	const reasons = facts.reasons ?? [row.kinds.includes('inverted') ? 'inverted' : 'strong_field'];
	if (!reasons.some((reason) => taken.includes(reason))) return said.notFor;
	return said.will(clock(row.quietFromMin ?? 0), clock(row.quietToMin ?? 0));
}

function causeOf({ row, facts }: Item): string | null {
	const said = mailWords();
	if (row.kinds.includes('inverted')) return said.cause.inverted;
	if (/refresh_due|drifting/.test(row.kinds)) {
		const cause = named(said.cause, facts.cause ?? 'unexplained') ?? said.cause.unexplained;
		return facts.causeMg === undefined ? cause : said.causeMg(cause, facts.causeMg);
	}
	if (row.kind === 'rejected_frames') return said.framesRefused(plain(facts.refusedWhy ?? ''));
	return row.kind === 'mail_failing' ? said.serverSays(facts.reply ?? '') : null;
}

/** '52.10234, 11.62345' of the bay's middle, else of the site. */
export function placeOf(row: NoticeRow): [number, number] | null {
	if (row.latDeg === null || row.lonDeg === null) return null;
	const ring = ringOf(row.geometry);
	if (ring === null) return [row.latDeg, row.lonDeg];
	const mean = (axis: 0 | 1) => ring.reduce((sum, c) => sum + c[axis], 0) / ring.length;
	return [mean(1), mean(0)];
}

function ringOf(geometry: string | null): [number, number][] | null {
	if (geometry === null) return null;
	try {
		const { coordinates } = JSON.parse(geometry) as { coordinates?: [number, number][][] };
		const ring = coordinates?.[0]?.slice(0, -1) ?? [];
		return ring.length === 0 || !ring.flat().every(Number.isFinite) ? null : ring;
	} catch {
		return null;
	}
}

/** Enough to act on without signing in. */
export function linesOf(item: Item, nowMs: number): Line[] {
	const { row, facts, zone } = item;
	const { next, otherwise, bring } = noticeWords(row.kind);
	const said = mailWords();
	const { label } = said;
	const at = (ms: number) => moment(ms, zone, nowMs);
	const left = daysLeft(facts.daysLeftLo, facts.daysLeftHi);
	const same = noticesWords().sameProfile;
	const lines: (Line | null)[] = [
		whereOf(row),
		placeLine(row),
		line(label.since, `${at(row.sinceMs)}, ${zoneName(nowMs, zone)}`),
		line(label.cause, causeOf(item)),
		line(label.drift, driftLine(facts)),
		line(label.bays, row.bay === null && facts.bays !== undefined ? baysOf(facts) : null),
		line(label.cell, facts.batteryMv === undefined ? null : `${facts.batteryMv} mV`),
		line(label.next, next),
		line(label.otherwise, said.consequence(otherwise, left)),
		line(label.tonight, tonight(item)),
		line(label.bring, bring?.replace(same, row.profile ?? same) ?? null),
		line(label.takeBy, at(row.deadlineMs))
	];
	return lines.filter((one) => one !== null);
}

const line = (label: string, value: string | null): Line | null =>
	value === null || value === '' ? null : { label, value };

function whereOf(row: NoticeRow): Line | null {
	const said = mailWords();
	if (row.bay === null) return line(said.label.where, row.siteName);
	const where = said.where(row.bay, row.zoneName, row.siteName ?? '', row.serial ?? '');
	return line(said.label.where, where);
}

function placeLine(row: NoticeRow): Line | null {
	const place = placeOf(row);
	if (place === null) return null;
	const text = place.map((deg) => deg.toFixed(5));
	return {
		label: mailWords().label.position,
		value: text.join(', '),
		href: `geo:${text.join(',')}`
	};
}

function baysOf(facts: NoticeFacts): string {
	const bays = facts.bays ?? [];
	const more = (facts.count ?? bays.length) - bays.length;
	return `${bays.join(', ')}${more > 0 ? ` ${mailWords().and(more)}` : ''}`;
}
