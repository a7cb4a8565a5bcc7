import type { NoticeKind } from '$lib/schemas/notices';
import { instantOf, localInput } from '$lib/format/time';
import { TAKE_WITHIN } from './kinds';

const DAY_MS = 86_400_000;
/** What is found at a weekend counts from here on the Monday. */
const MONDAY_BEGINS = '08:00';

/** Day of the week of a wall time: 0 Sunday … 6 Saturday. */
export const weekday = (wall: string): number =>
	new Date(`${wall.slice(0, 10)}T00:00Z`).getUTCDay();
const isWeekend = (wall: string): boolean => weekday(wall) % 6 === 0;
const nextDay = (wall: string): string =>
	new Date(Date.parse(`${wall.slice(0, 10)}T00:00Z`) + DAY_MS).toISOString().slice(0, 10);

/**
 * The same time of day, n working days on (Monday to Friday in `zone`). From a weekend it counts from
 * the Monday's beginning.
 */
export function addWorkingDays(fromMs: number, n: number, zone: string): number {
	let wall = localInput(fromMs, zone);
	while (isWeekend(wall)) wall = `${nextDay(wall)}T${MONDAY_BEGINS}`;
	for (let left = n; left > 0;) {
		wall = `${nextDay(wall)}${wall.slice(10)}`;
		if (!isWeekend(wall)) left -= 1;
	}
	return instantOf(wall, zone) ?? fromMs + n * DAY_MS;
}

/** By when somebody must have taken a notice of this kind opened at `fromMs`. */
export function deadlineOf(kind: NoticeKind, fromMs: number, zone: string): number {
	const within = TAKE_WITHIN[kind];
	return 'minutes' in within
		? fromMs + within.minutes * 60_000
		: addWorkingDays(fromMs, within.workingDays, zone);
}
