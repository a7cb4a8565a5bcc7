import { conditionWord, markWord, stateWord } from '$lib/format/words';
import { words } from '$lib/format/messages';
import type { BayItem } from './types';

/** How a bay is drawn (product.md, 'The look'). */
export type Mark = 'taken' | 'free' | 'unknown' | 'withdrawn' | 'closed';

export interface Holder {
	/** Who has it, by initials. */
	initials: string;
}

/** Whether a closure holds at that time; one that begins later is only announced. */
export const closedNow = (bay: BayItem, nowMs: number): boolean =>
	bay.closed !== null && Date.parse(bay.closed.from) <= nowMs && nowMs < Date.parse(bay.closed.to);

export function markOf(bay: BayItem | undefined, nowMs: number): Mark {
	if (bay === undefined) return 'unknown';
	if (closedNow(bay, nowMs)) return 'closed';
	if (bay.condition === 'withdrawn') return 'withdrawn';
	if (bay.state === 'occupied') return 'taken';
	return bay.state === 'vacant' ? 'free' : 'unknown';
}

/** Conditions that end only when a person does something. */
const PERSON_CONDITIONS = ['silent', 'inverted', 'clipped', 'refresh_due'];

/** Why a bay needs a person, in words, or null. A closed bay asks for nobody. */
export function needOf(bay: BayItem, nowMs: number): string | null {
	if (closedNow(bay, nowMs)) return null;
	if (bay.doubt !== null) return words().plan.doubtful;
	const condition = [bay.condition, ...bay.also].find((c) => PERSON_CONDITIONS.includes(c));
	if (condition !== undefined) return conditionWord(condition);
	return bay.also.includes('low_cell') ? markWord('low_cell') : null;
}

/** What a mark means, in words. */
export function markText(mark: Mark): string {
	if (mark === 'closed' || mark === 'withdrawn') return words().plan[mark];
	return stateWord(mark === 'taken' ? 'occupied' : mark === 'free' ? 'vacant' : 'unknown');
}

export interface Tally {
	bays: number;
	taken: number;
	free: number;
	unknown: number;
	closed: number;
	withdrawn: number;
	doubtful: number;
}

export function tally(bays: Iterable<BayItem>, nowMs: number): Tally {
	const sum = { bays: 0, taken: 0, free: 0, unknown: 0, closed: 0, withdrawn: 0, doubtful: 0 };
	for (const bay of bays) {
		sum.bays += 1;
		sum[markOf(bay, nowMs)] += 1;
		if (bay.doubt !== null) sum.doubtful += 1;
	}
	return sum;
}
