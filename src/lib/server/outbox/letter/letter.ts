import { moment, zoneName } from '$lib/format/time';
import { noticeWords } from '$lib/format/notice-words';
import { count } from '$lib/format/words';
import { headOf, linesOf, newsOf, type Item, type Line } from './item';

/** Beyond these a mail says how many more there are: the sheet holds them all. */
const LISTED = 30;
const NAMED_IN_SUBJECT = 3;
const SUBJECT_MOST = 190;

export interface LetterWanted {
	to: { name: string };
	/** null: of the whole installation. */
	site: { slug: string; name: string } | null;
	items: readonly Item[];
	/** The reader's time zone. */
	zone: string;
	nowMs: number;
	/** 'https://keep.example' */
	origin: string;
	/** null: nothing to take. */
	acknowledgeUrl: string | null;
	unsubscribeUrl: string;
	/** A plot goes with it under this name. */
	plotCid: string | null;
}

/** What a mail says, before it is drawn as HTML or as text. */
export interface Letter {
	subject: string;
	heading: string;
	/** Under the heading: what has happened to it. */
	news: string | null;
	/** Of a single notice. */
	lines: Line[];
	/** Of many, by kind. */
	groups: { title: string; next: string; rows: string[][] }[];
	more: string | null;
	plot: { cid: string; alt: string } | null;
	actions: { text: string; href: string; main: boolean }[];
	foot: { text: string; href?: string }[];
	block: Line[];
}

/** A mail about one notice says everything; about many it lists them by what is to be done. */
export function compose(wanted: LetterWanted): Letter {
	const [first] = wanted.items;
	const one = wanted.items.length === 1 && first !== undefined ? first : null;
	const subject = subjectOf(wanted).slice(0, SUBJECT_MOST);
	return {
		subject,
		heading: one === null ? headingOfMany(wanted) : headOf(one, wanted.nowMs),
		news: one === null ? newsOfMany(wanted.items) : newsOf(one),
		lines: one === null ? [] : linesOf(one, wanted.nowMs),
		groups: one === null ? groupsOf(wanted) : [],
		more:
			one === null && wanted.items.length > LISTED
				? `and ${wanted.items.length - LISTED} more: see the sheet`
				: null,
		plot:
			wanted.plotCid === null || one === null ? null : { cid: wanted.plotCid, alt: plotWords(one) },
		actions: actionsOf(wanted, one),
		foot: footOf(wanted),
		block: [
			{ label: 'Site', value: wanted.site?.name ?? 'all of Lodekeep' },
			{ label: 'Sheet', value: 'notices, by mail' },
			{
				label: 'As of',
				value: `${moment(wanted.nowMs, wanted.zone, 0)} ${zoneName(wanted.nowMs, wanted.zone)}`
			}
		]
	};
}

function subjectOf({ items, site, nowMs }: LetterWanted): string {
	const [first] = items;
	if (first === undefined) return 'Lodekeep';
	const again = items.every(({ what }) => what === 'taken' || what === 'closed');
	const urged = items.some(({ what }) => what === 'escalated');
	const before = again ? 'Re: ' : urged ? 'Nobody has it: ' : '';
	if (items.length === 1) return before + headOf(first, nowMs);
	const word = noticeWords(first.row.kind).word;
	const bays = items.flatMap(({ row }) => (row.kind === first.row.kind ? (row.bay ?? []) : []));
	const named = bays.slice(0, NAMED_IN_SUBJECT).join(', ');
	const at = named === '' ? '' : ` at ${named}${bays.length > NAMED_IN_SUBJECT ? ' …' : ''}`;
	return `${before}${site?.name ?? 'Lodekeep'}: ${count(items.length, 'notice')}, ${word}${at}`;
}

const headingOfMany = ({ items, site }: LetterWanted): string =>
	`${site?.name ?? 'Lodekeep'}: ${count(items.length, 'notice')}`;

function newsOfMany(items: readonly Item[]): string | null {
	const news = new Set(items.map((item) => newsOf(item)));
	const [only] = news;
	return news.size === 1 ? (only ?? null) : null;
}

function groupsOf({ items, nowMs }: LetterWanted): Letter['groups'] {
	const groups = new Map<string, Item[]>();
	for (const item of items.slice(0, LISTED))
		groups.set(item.row.kind, [...(groups.get(item.row.kind) ?? []), item]);
	return [...groups].map(([kind, own]) => ({
		title: `${noticeWords(kind).word}, ${own.length}`,
		next: noticeWords(kind).next,
		rows: own.map((item) => [
			item.row.bay ?? headOf(item, nowMs),
			item.row.bay === null ? '' : (item.row.zoneName ?? ''),
			`since ${moment(item.row.sinceMs, item.zone, nowMs)}`,
			`take by ${moment(item.row.deadlineMs, item.zone, nowMs)}`
		])
	}));
}

function plotWords({ facts }: Item): string {
	const now = facts.unexplainedMg === undefined ? '' : `, now ${facts.unexplainedMg} mG`;
	return `Unexplained drift over the last days${now}, against its limits`;
}

function actionsOf(wanted: LetterWanted, one: Item | null): Letter['actions'] {
	const { origin, site, acknowledgeUrl } = wanted;
	const path = site === null ? '/notices' : `/sites/${site.slug}/notices`;
	const actions = [{ text: 'Open the sheet', href: `${origin}${path}`, main: true }];
	if (one !== null && one.row.bay !== null && site !== null)
		actions.push({
			text: `Dossier of ${one.row.bay}`,
			href: `${origin}/sites/${site.slug}/bays/${encodeURIComponent(one.row.bay)}`,
			main: false
		});
	const takes = one === null ? 'I take them' : 'I take it';
	if (acknowledgeUrl !== null) actions.unshift({ text: takes, href: acknowledgeUrl, main: true });
	return actions;
}

const footOf = ({ to, origin, unsubscribeUrl }: LetterWanted): Letter['foot'] => [
	{ text: `To ${to.name}, who has this site.` },
	{ text: 'What is mailed, and when', href: `${origin}/mail-settings` },
	{ text: 'No more mail of notices', href: unsubscribeUrl }
];
