import { count } from './words';

interface KindWords {
	/** Of one node or site: 'film refresh due'. */
	word: string;
	/** What is done next, and where several stand together. */
	next: string;
	/** What happens if nobody acts. */
	otherwise: string;
	/** What to bring; null where nobody need go. */
	bring: string | null;
}

/** What people read of each kind of notice: on the sheet and in mail. */
const WORDS: Record<string, KindWords> = {
	site_late: {
		word: 'site late',
		next: 'look at the site’s network and the broker',
		otherwise: 'all its bays turn not known',
		bring: null
	},
	mail_failing: {
		word: 'mail failing',
		next: 'correct the address or the mail server',
		otherwise: 'nobody at this address is told of anything',
		bring: null
	},
	silent: {
		word: 'silent',
		next: 'look at the gateway, then send someone',
		otherwise: 'the bay stays not known',
		bring: 'a spare node of the same profile, a cell, the key sheet of today'
	},
	inverted: {
		word: 'film inverted',
		next: 'approve a film refresh',
		otherwise: 'the state is right only as long as nothing else moves the field',
		bring: null
	},
	clipped: {
		word: 'clipped',
		next: 'send someone to look for a magnet or steel',
		otherwise: 'the bay stays not known',
		bring: 'a torch, and something to lift a magnet with; no magnet of your own'
	},
	refresh_not_cured: {
		word: 'film refresh did not cure it',
		next: 'plan a visit',
		otherwise: 'the drift goes on and the states turn wrong',
		bring: 'a spare node of the same profile, coring and sealing tools, the key sheet of today'
	},
	refresh_due: {
		word: 'film refresh due',
		next: 'approve a film refresh',
		otherwise: 'the drift goes on until the states turn wrong',
		bring: null
	},
	drifting: {
		word: 'drifting',
		next: 'watch it; a pair tells the cause',
		otherwise: 'it comes to a film refresh due',
		bring: null
	},
	reference_vehicle: {
		word: 'reference may hold a vehicle',
		next: 'look at the bay and settle it',
		otherwise: 'free and taken may stand the wrong way round',
		bring: null
	},
	low_cell: {
		word: 'low cell',
		next: 'plan a change of the cell',
		otherwise: 'the node falls silent',
		bring: 'a cell of the profile’s kind, seals; the maker’s handling rules'
	},
	rejected_frames: {
		word: 'frames refused',
		next: 'check its key and profile',
		otherwise: 'what it says is not believed',
		bring: null
	},
	clock_off: {
		word: 'clock off',
		next: 'none as long as it is heard; its times are shifted to arrival',
		otherwise: 'late frames of it stand at the wrong time',
		bring: null
	}
};
const UNKNOWN: KindWords = { word: '', next: 'look at it', otherwise: '', bring: null };

export const noticeWords = (kind: string): KindWords =>
	WORDS[kind] ?? { ...UNKNOWN, word: kind.replaceAll('_', ' ') };

/** '3 to 6 days left', 'less than a day left', null where it is not known. */
export function daysLeft(lo: number | undefined, hi: number | undefined): string | null {
	if (lo === undefined) return null;
	const [from, to] = [Math.floor(lo), hi === undefined ? null : Math.ceil(hi)];
	if (to === null) return `${count(from, 'day')} left or more`;
	if (to <= 1) return 'less than a day left';
	return from >= to ? `${count(to, 'day')} left` : `${from} to ${to} days left`;
}

const SHARED: Record<string, (label: string) => string> = {
	site: () => 'from all over the site',
	gateway: (label) => `all by ${label}`,
	zone: (label) => `all in ${label}`
};

/** 'Since 08:12, 84 of 500 nodes not heard, all by G2' */
export function stormSentence(
	since: string,
	f: {
		count?: number | undefined;
		of?: number | undefined;
		shared?: string | undefined;
		label?: string | undefined;
	}
): string {
	const by = SHARED[f.shared ?? 'site']?.(f.label ?? '') ?? '';
	return `Since ${since}, ${f.count ?? 0} of ${f.of ?? 0} nodes not heard, ${by}`;
}

export const HOW_WORDS: Record<string, string> = {
	healed: 'healed by itself',
	proved: 'proved cured',
	visit: 'closed by a visit',
	removed: 'the node was taken out',
	folded: 'told together with others'
};
