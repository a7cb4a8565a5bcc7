import type { NoticeKind } from './notices';

/** One open notice as the sheet shows it. */
export interface NoticeView {
	id: number;
	kind: NoticeKind;
	word: string;
	/** Bay code, or what many share, in words. */
	what: string;
	/** Dossier or plan; null where there is none. */
	href: string | null;
	zone: string | null;
	site: { slug: string; name: string; timezone: string } | null;
	sinceMs: number;
	/** What happens if nobody acts, with days left where known. */
	otherwise: string;
	deadlineMs: number;
	/** 0 told, 1 with the deputy, 2 with the admins. */
	stage: number;
	also: string[];
	awaitsProof: boolean;
	/** How often it has opened. */
	times: number;
	cause: string | null;
	holder: { name: string; initials: string; mine: boolean } | null;
	snoozedUntilMs: number | null;
	told: { name: string; atMs: number | null; dueMs: number | null }[];
	entries: { atMs: number; text: string; by: string | null }[];
}

/** Notices with one cause and one next step. */
export interface NoticeGroup {
	key: string;
	title: string;
	next: string;
	deadlineMs: number;
	rows: NoticeView[];
}

export interface EndedView {
	id: number;
	word: string;
	what: string;
	siteName: string | null;
	timezone: string;
	closedAtMs: number;
	how: string;
	/** It ended without anybody. */
	healed: boolean;
}

export interface NoticeSheetView {
	nowMs: number;
	/** null = never here before. */
	since: { atMs: number | null; opened: number; closed: number; taken: number };
	groups: NoticeGroup[];
	/** Of the last week, the newest first; `endedCount` of how many. */
	ended: EndedView[];
	/** There are more open ones than a sheet shows. */
	more: boolean;
	people: { id: number; name: string }[];
	maySnooze: boolean;
}

/** Which notices are shown: nobody has them, mine, all that are open, asleep. */
export const NOTICE_VIEWS = ['nobody', 'mine', 'open', 'snoozed'] as const;
export type NoticeViewName = (typeof NOTICE_VIEWS)[number];
