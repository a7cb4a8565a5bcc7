import { noticeWords } from '$lib/format/notice-words';
import type { NoticeGroup, NoticeView } from '$lib/schemas/notice-sheet';
import type { NoticeKind } from '$lib/schemas/notices';

/** Short cause for a title: what the kinds of a group have in common. */
const CAUSES: Partial<Record<NoticeKind, string>> = {
	refresh_due: 'film loss',
	inverted: 'film flipped',
	drifting: 'drift',
	clipped: 'overloaded',
	low_cell: 'low cell'
};
/** Done for all at once. */
const TOGETHER: Partial<Record<NoticeKind, string>> = {
	refresh_due: 'approve together',
	inverted: 'approve together',
	clipped: 'one visit',
	low_cell: 'one visit',
	refresh_not_cured: 'one visit',
	silent: 'look at what they share, then one visit'
};

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
	const next = (many ? TOGETHER[first.kind] : null) ?? noticeWords(first.kind).next;
	const where = first.zone === null ? (first.site?.name ?? 'Lodekeep') : `Zone ${first.zone}`;
	const cause = CAUSES[first.kind] ?? noticeWords(first.kind).word;
	const title = many ? `${rows.length} nodes, ${where}, ${cause}` : `${where}, ${cause}`;
	return { key, title, next, deadlineMs: first.deadlineMs, rows };
}
