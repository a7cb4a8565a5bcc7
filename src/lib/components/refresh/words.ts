import { decimal } from '$lib/format/field';
import { named, words } from '$lib/format/messages';
import { refreshWords } from '$lib/format/messages/refreshes';

/** What people read for the steps of a film refresh. */
export const stateWords = (state: string): string =>
	named(refreshWords().state, state) ?? state.replaceAll('_', ' ');

/** What holds one back, after 'waits for'. */
export const waitWords = (guard: string): string =>
	named(refreshWords().waits, guard) ?? guard.replaceAll('_', ' ');

const OPEN = ['asked', 'approved', 'waiting', 'sent', 'obeyed', 'measured'];
export const isOpen = (state: string): boolean => OPEN.includes(state);

/** '01:00' of minutes since midnight, and back (null when it is no time). */
export const clockOf = (minute: number): string =>
	`${String(Math.floor(minute / 60)).padStart(2, '0')}:${String(minute % 60).padStart(2, '0')}`;
export function minuteOf(clock: string): number | null {
	const [, h, m] = /^([01]\d|2[0-3]):([0-5]\d)$/.exec(clock) ?? [];
	return h === undefined || m === undefined ? null : Number(h) * 60 + Number(m);
}

/** '1.3 days', '40 min': how much of the cell's life a charge is. */
export const lifeWords = (days: number): string =>
	days >= 1
		? refreshWords().days(decimal(days, 1))
		: `${Math.max(1, Math.round(days * 1440))} ${words().duration.minute}`;
