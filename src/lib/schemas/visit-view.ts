import type { LoadList, VisitCause, VisitOutcome } from './visit-kinds';

/** Views of visits as the server gives them to the application's own pages. */
export interface CauseView {
	cause: VisitCause;
	detail: string;
	atMs: number;
	/** It has ended by itself meanwhile. */
	endedAtMs: number | null;
}

export interface RequestView {
	id: number;
	bay: string;
	zone: string;
	serial: string | null;
	askedAtMs: number;
	causes: CauseView[];
	/** Who has it, and in which walk; null = nobody yet. */
	taker: { name: string; initials: string; mine: boolean; visit: number | null } | null;
}

export interface PermitView {
	name: string;
	number: string;
	lastDay: string | null;
	/** Days of the site from today to its last day; negative = over; null = without an end. */
	daysLeft: number | null;
}

export interface AccessView {
	parking: string;
	wayIn: string;
	/** null: not shown to this role. */
	keysAt: string | null;
	contact: string | null;
	permits: PermitView[];
	version: number;
	changedAtMs: number | null;
}

export interface PhotoView {
	id: string;
	madeAtMs: number;
	mine: boolean;
	added: boolean;
}

/** Something that came when the stop was closed already. */
export interface AdditionView {
	id: string;
	kind: 'tick' | 'part' | 'outcome' | 'note';
	code: string;
	amount: number;
	text: string;
	madeAtMs: number;
	by: string | null;
}

export interface StopView {
	id: number;
	request: number;
	place: number;
	bay: string;
	zone: string;
	serial: string | null;
	profile: string | null;
	causes: CauseView[];
	/** Check code → done. */
	ticks: Record<string, boolean>;
	/** Part code → count. */
	parts: Record<string, number>;
	notes: { id: string; text: string; madeAtMs: number; by: string | null }[];
	outcome: VisitOutcome | null;
	outcomeNote: string;
	endedAtMs: number | null;
	endedBy: string | null;
	photos: PhotoView[];
	additions: AdditionView[];
}

export interface WalkOutline {
	code: string;
	zone: string;
	ring: [number, number][] | null;
}

/** One walk with all that is needed in the street. */
export interface WalkView {
	id: number;
	site: { slug: string; name: string; timezone: string; demo: boolean };
	takenAtMs: number;
	endedAtMs: number | null;
	mine: boolean;
	by: string | null;
	stops: StopView[];
	/** Length of the walk from the first drawn stop to the last, m. */
	lengthM: number;
	load: LoadList;
	access: AccessView;
	outlines: WalkOutline[];
	asOfMs: number;
}

export interface WalkLine {
	id: number;
	takenAtMs: number;
	endedAtMs: number | null;
	by: string | null;
	mine: boolean;
	stops: number;
	done: number;
}

export interface SiteVisits {
	site: { slug: string; name: string; timezone: string; demo: boolean };
	requests: RequestView[];
	open: WalkLine[];
	ended: WalkLine[];
	access: AccessView;
}
