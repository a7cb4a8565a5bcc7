import { named } from '$lib/format/messages';
import { noticesWords } from '$lib/format/messages/notices';
import { noticeWords } from '$lib/format/notice-words';
import type { NoticeGroup, NoticeView } from '$lib/schemas/notice-sheet';

/** By site, zone, cause and next step; the nearest deadline first, in groups and inside them. */
export function groupNotices(views: readonly NoticeView[]): NoticeGroup[] {
	const groups = new Map<string, NoticeView[]>();
	for (const view of views) {
		const key = [view.site?.slug ?? '', view.zone ?? '', view.kind].join(':');
		groups.set(key, [...(groups.get(key) ?? []), view]);
	}
	return [...groups]
		.map(([key, rows]) => groupOf(key, rows))
		.sort((a, b) => a.deadlineMs - b.deadlineMs);
}

function groupOf(key: string, all: readonly NoticeView[]): NoticeGroup {
	const rows = [...all].sort((a, b) =>
		a.deadlineMs === b.deadlineMs ? a.id - b.id : a.deadlineMs - b.deadlineMs
	);
	const [first] = rows as [NoticeView, ...NoticeView[]];
	const many = rows.length > 1;
	const said = noticesWords();
	const next =
		(many ? named(said.together, first.kind) : undefined) ?? noticeWords(first.kind).next;
	const where = first.zone === null ? (first.site?.name ?? 'Lodekeep') : said.zone(first.zone);
	const cause = named(said.cause, first.kind) ?? noticeWords(first.kind).word;
	const title = many ? said.nodesWhere(rows.length, where, cause) : `${where}, ${cause}`;
	return { key, title, next, deadlineMs: first.deadlineMs, rows };
}
