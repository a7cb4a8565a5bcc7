import { NOTICE_KINDS, type NoticeKind } from '$lib/schemas/notices';

/** By when somebody must have taken a notice: minutes, or working days at the site. */
export type Within = { minutes: number } | { workingDays: number };

/** Issue 6: site late 30 min; inverted, clipped, not cured 1 working day; refresh due 2; low cell 10. */
export const TAKE_WITHIN: Record<NoticeKind, Within> = {
	site_late: { minutes: 30 },
	mail_failing: { workingDays: 1 },
	silent: { workingDays: 1 },
	inverted: { workingDays: 1 },
	clipped: { workingDays: 1 },
	refresh_not_cured: { workingDays: 1 },
	refresh_due: { workingDays: 2 },
	reference_vehicle: { workingDays: 2 },
	rejected_frames: { workingDays: 2 },
	drifting: { workingDays: 5 },
	clock_off: { workingDays: 5 },
	low_cell: { workingDays: 10 }
};

/** Mailed at any hour: the default quiet hours leave it out. */
export const mailedAtAnyHour = (kind: NoticeKind): boolean => kind === 'site_late';

const RANK = new Map(NOTICE_KINDS.map((kind, rank) => [kind, rank]));
export const rankOf = (kind: NoticeKind): number => RANK.get(kind) ?? NOTICE_KINDS.length;

/** Each once, the most serious first. */
export const ranked = (kinds: Iterable<NoticeKind>): NoticeKind[] =>
	[...new Set(kinds)].sort((a, b) => rankOf(a) - rankOf(b));

/** Kinds as the table keeps them: comma separated. */
export const kindsOf = (text: string): NoticeKind[] =>
	text.split(',').filter((kind): kind is NoticeKind => RANK.has(kind as NoticeKind));
