import { words } from '$lib/format/messages';
import { markWord, stateWord } from '$lib/format/words';
import { closedNow, markOf, needOf } from './marks';
import type { BayItem } from './types';

const CONDITIONS = [
	'learning',
	'silent',
	'inverted',
	'clipped',
	'refresh_due',
	'drifting',
	'low_cell',
	'withdrawn'
];

/** What the plan may be narrowed to, with the words of the list. */
export function conditionFilters(): { value: string; text: string }[] {
	const { plan } = words();
	return [
		{ value: 'all', text: plan.everything },
		{ value: 'need', text: plan.needsPerson },
		{ value: 'doubtful', text: plan.doubtful },
		{ value: 'taken', text: stateWord('occupied') },
		{ value: 'free', text: stateWord('vacant') },
		{ value: 'unknown', text: stateWord('unknown') },
		{ value: 'closed', text: plan.closed },
		...CONDITIONS.map((value) => ({ value, text: markWord(value) }))
	];
}

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
