import { closedNow, markOf, needOf } from './marks';
import type { BayItem } from './types';

/** What the plan may be narrowed to; the words of the list. */
export const CONDITION_FILTERS = [
	{ value: 'all', text: 'everything' },
	{ value: 'need', text: 'needs a person' },
	{ value: 'doubtful', text: 'doubtful' },
	{ value: 'taken', text: 'taken' },
	{ value: 'free', text: 'free' },
	{ value: 'unknown', text: 'not known' },
	{ value: 'closed', text: 'closed' },
	{ value: 'learning', text: 'learning' },
	{ value: 'silent', text: 'silent' },
	{ value: 'inverted', text: 'inverted' },
	{ value: 'clipped', text: 'clipped' },
	{ value: 'refresh_due', text: 'film refresh due' },
	{ value: 'drifting', text: 'drifting' },
	{ value: 'low_cell', text: 'low cell' },
	{ value: 'withdrawn', text: 'withdrawn' }
] as const;

export function matches(bay: BayItem, zone: string, condition: string, nowMs: number): boolean {
	if (zone !== 'all' && bay.zone !== zone) return false;
	switch (condition) {
		case 'all':
			return true;
		case 'need':
			return needOf(bay, nowMs) !== null;
		case 'doubtful':
			return bay.doubt !== null;
		case 'taken':
		case 'free':
		case 'unknown':
			return markOf(bay, nowMs) === condition;
		case 'closed':
			return closedNow(bay, nowMs);
		default:
			return bay.condition === condition || bay.also.includes(condition);
	}
}
