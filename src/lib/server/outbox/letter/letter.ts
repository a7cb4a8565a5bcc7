import { moment, zoneName } from '$lib/format/time';
import { noticeWords } from '$lib/format/notice-words';
import { mailWords } from '$lib/format/messages/mail';
import { PULSED, headOf, linesOf, newsOf, type Item, type Line } from './item';

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
	/** Our mark at its head; null: in letters. */
	markCid: string | null;
}

/** What a mail says, before it is drawn as HTML or as text. */
export interface Letter {
	/** 'en' or 'de', for the reader's program. */
	lang: string;
	markCid: string | null;
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
	const said = mailWords();
	return {
		...{ lang: said.lang, markCid: wanted.markCid },
		subject: subjectOf(wanted).slice(0, SUBJECT_MOST),
		heading: one === null ? headingOfMany(wanted) : headOf(one, wanted.nowMs),
		news: one === null ? newsOfMany(wanted.items) : newsOf(one),
		lines: one === null ? [] : linesOf(one, wanted.nowMs),
		groups: one === null ? groupsOf(wanted) : [],
		more:
			one === null && wanted.items.length > LISTED
				? said.andMore(wanted.items.length - LISTED)
				: null,
		plot:
			wanted.plotCid === null || one === null ? null : { cid: wanted.plotCid, alt: plotWords(one) },
		actions: actionsOf(wanted, one),
		foot: footOf(wanted),
		block: [
			{ label: said.label.site, value: wanted.site?.name ?? said.allOfLodekeep },
			{ label: said.label.sheet, value: said.sheetName },
			{
				label: said.label.asOf,
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
	const said = mailWords();
	const before = again ? said.reply : urged ? said.nobodyHasIt : '';
	if (items.length === 1) return before + headOf(first, nowMs);
	const word = noticeWords(first.row.kind).word;
	const bays = items.flatMap(({ row }) => (row.kind === first.row.kind ? (row.bay ?? []) : []));
	const named = bays.slice(0, NAMED_IN_SUBJECT).join(', ');
	const at = named === '' ? '' : said.at(`${named}${bays.length > NAMED_IN_SUBJECT ? ' …' : ''}`);
	return `${before}${said.notices(site?.name ?? 'Lodekeep', items.length)}, ${word}${at}`;
}

const headingOfMany = ({ items, site }: LetterWanted): string =>
	mailWords().notices(site?.name ?? 'Lodekeep', items.length);

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
			mailWords().since(moment(item.row.sinceMs, item.zone, nowMs)),
			mailWords().takeBy(moment(item.row.deadlineMs, item.zone, nowMs))
		])
	}));
}

const plotWords = ({ facts }: Item): string => mailWords().plot(facts.unexplainedMg ?? null);

function actionsOf(wanted: LetterWanted, one: Item | null): Letter['actions'] {
	const { origin, site, acknowledgeUrl } = wanted;
	const path = site === null ? '/notices' : `/sites/${site.slug}/notices`;
	const said = mailWords();
	const actions = [{ text: said.openSheet, href: `${origin}${path}`, main: true }];
	if (site !== null && wanted.items.some(({ row }) => PULSED.test(row.kinds)))
		actions.push({
			text: said.openRefreshes,
			href: `${origin}/sites/${site.slug}/refreshes`,
			main: false
		});
	if (one !== null && one.row.bay !== null && site !== null)
		actions.push({
			text: said.dossier(one.row.bay),
			href: `${origin}/sites/${site.slug}/bays/${encodeURIComponent(one.row.bay)}`,
			main: false
		});
	const takes = one === null ? said.takeMany : said.takeOne;
	if (acknowledgeUrl !== null) actions.unshift({ text: takes, href: acknowledgeUrl, main: true });
	return actions;
}

const footOf = ({ to, origin, unsubscribeUrl }: LetterWanted): Letter['foot'] => [
	{ text: mailWords().to(to.name) },
	{ text: mailWords().settings, href: `${origin}/mail-settings` },
	{ text: mailWords().noMore, href: unsubscribeUrl }
];
