import { moment, zoneName } from '$lib/format/time';
import { daysLeft, HOW_WORDS, noticeWords, stormSentence } from '$lib/format/notice-words';
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
	if (row.bay !== null) {
		const left = daysLeft(facts.daysLeftLo, facts.daysLeftHi);
		const word = noticeWords(row.kind).word;
		return `${row.bay}, ${row.siteName ?? ''}: ${word}${left === null ? '' : `, ${left}`}`;
	}
	if (row.kind === 'silent') return `${row.siteName ?? ''}: ${stormSentence(since, facts)}`;
	if (row.kind === 'site_late') return `${row.siteName ?? ''}: site late since ${since}`;
	if (row.kind === 'mail_failing') return `Mail failing: ${facts.address ?? ''}`;
	return `${row.siteName ?? ''}: ${noticeWords(row.kind).word}`;
}

/** What has happened to a notice that was told before; null for a new one. */
export function newsOf({ what, detail, row }: Item): string | null {
	if (what === 'taken') return `${detail} has it now.`;
	if (what === 'closed') return `It is over: ${HOW_WORDS[detail] ?? detail}.`;
	if (what === 'escalated')
		return detail === 'deputy'
			? 'Nobody has taken it in time. You are named as deputy.'
			: 'Nobody has taken it in time, nor a deputy. It comes to the admins.';
	if (what === 'worse') return `It was '${noticeWords(detail).word}' before.`;
	return row.takerName === null ? null : `${row.takerName} has it.`;
}

const clock = (min: number): string =>
	`${String(Math.floor(min / 60)).padStart(2, '0')}:${String(min % 60).padStart(2, '0')}`;

const PULSED = /inverted|refresh_due/;

function tonight({ row }: Item): string | null {
	if (!PULSED.test(row.kinds)) return null;
	if (row.scheduleOn !== 1) return 'no rule will do it: it waits for a person';
	const hours = `${clock(row.quietFromMin ?? 0)} to ${clock(row.quietToMin ?? 0)}`;
	return `a rule may do it, ${hours} at the site, if the bay is free (${(row.scheduleReasons ?? '').replaceAll('_', ' ').replaceAll(',', ', ')})`;
}

function causeOf({ row, facts }: Item): string | null {
	if (facts.cause !== undefined) return facts.cause;
	if (row.kinds.includes('inverted')) return 'the film has flipped: a strong field came near';
	if (/refresh_due|drifting/.test(row.kinds))
		return 'not temperature, not the geomagnetic field, not the bridge: most likely film loss, until a pulse measures it';
	if (row.kind === 'rejected_frames')
		return `frames refused: ${facts.refusedWhy?.replaceAll('_', ' ') ?? ''}`;
	if (row.kind === 'mail_failing') return `the mail server says: ${facts.reply ?? ''}`;
	return null;
}

function rateOf({ facts }: Item): string | null {
	if (facts.unexplainedMg === undefined) return null;
	const rate = facts.rateMgPerDay === undefined ? '' : `, ${facts.rateMgPerDay} mG a day more`;
	return `${facts.unexplainedMg} mG unexplained${rate}`;
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
	const words = noticeWords(row.kind);
	const at = (ms: number) => moment(ms, zone, nowMs);
	const lines: (Line | null)[] = [
		whereOf(row),
		placeLine(row),
		line('Since', `${at(row.sinceMs)} (${zoneName(nowMs, zone)})`),
		line('Cause', causeOf(item)),
		line('Drift', rateOf(item)),
		line('Bays', row.bay === null && facts.bays !== undefined ? baysOf(facts) : null),
		line('Cell', facts.batteryMv === undefined ? null : `${facts.batteryMv} mV`),
		line('Next', words.next),
		line('If nobody acts', consequenceOf(item)),
		line('Tonight', tonight(item)),
		line(
			'Bring',
			words.bring === null
				? null
				: words.bring.replace('the same profile', row.profile ?? 'the same profile')
		),
		line('Take it by', at(row.deadlineMs))
	];
	return lines.filter((one) => one !== null);
}

const line = (label: string, value: string | null): Line | null =>
	value === null || value === '' ? null : { label, value };

function whereOf(row: NoticeRow): Line | null {
	if (row.bay === null) return line('Where', row.siteName);
	const zone = row.zoneName === null ? '' : `, zone ${row.zoneName}`;
	return line('Where', `bay ${row.bay}${zone}, ${row.siteName ?? ''}; node ${row.serial ?? ''}`);
}

function placeLine(row: NoticeRow): Line | null {
	const place = placeOf(row);
	if (place === null) return null;
	const text = place.map((deg) => deg.toFixed(5));
	return { label: 'Position', value: text.join(', '), href: `geo:${text.join(',')}` };
}

function baysOf(facts: NoticeFacts): string {
	const bays = facts.bays ?? [];
	const more = (facts.count ?? bays.length) - bays.length;
	return `${bays.join(', ')}${more > 0 ? ` and ${more} more` : ''}`;
}

function consequenceOf({ row, facts }: Item): string {
	const left = daysLeft(facts.daysLeftLo, facts.daysLeftHi);
	const { otherwise } = noticeWords(row.kind);
	return left === null ? otherwise : `${otherwise}: ${left}`;
}
