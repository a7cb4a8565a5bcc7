import { instantOf, localInput } from '$lib/format/time';
import type { MailSettings, NoticeKind, Pace } from '$lib/schemas/notices';
import { weekday } from './deadline';
import { mailedAtAnyHour } from './kinds';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;

type Quiet = Pick<MailSettings, 'quietFromMin' | 'quietToMin' | 'quietWeekends'>;

const minutesOf = (wall: string): number =>
	Number(wall.slice(11, 13)) * 60 + Number(wall.slice(14));
const clock = (min: number): string =>
	`${String(Math.floor(min / 60)).padStart(2, '0')}:${String(min % 60).padStart(2, '0')}`;
const dayAfter = (wall: string): string =>
	new Date(Date.parse(`${wall.slice(0, 10)}T00:00Z`) + DAY_MS).toISOString().slice(0, 10);

/** Whether a time of day lies in hours that may go over midnight; equal ends are no hours. */
function inHours(min: number, fromMin: number, toMin: number): boolean {
	if (fromMin === toMin) return false;
	return fromMin < toMin ? min >= fromMin && min < toMin : min >= fromMin || min < toMin;
}

export function isQuiet(atMs: number, q: Quiet, zone: string): boolean {
	const wall = localInput(atMs, zone);
	if (q.quietWeekends && weekday(wall) % 6 === 0) return true;
	return inHours(minutesOf(wall), q.quietFromMin, q.quietToMin);
}

/** The first instant from `atMs` on that is not quiet; `atMs` itself when it is not. */
export function afterQuiet(atMs: number, q: Quiet, zone: string): number {
	let t = atMs;
	// Two weekend days, their midnights and the hours around them: never more than six steps.
	for (let step = 0; step < 8 && isQuiet(t, q, zone); step += 1) {
		const wall = localInput(t, zone);
		const weekend = q.quietWeekends && weekday(wall) % 6 === 0;
		const today = minutesOf(wall) < q.quietToMin;
		const next = weekend
			? `${dayAfter(wall)}T00:00`
			: `${today ? wall.slice(0, 10) : dayAfter(wall)}T${clock(q.quietToMin)}`;
		// Beside a change of the clocks a wall time may lie behind: never go back.
		t = Math.max(instantOf(next, zone) ?? t + HOUR_MS, t + 60_000);
	}
	return t;
}

function digestMs(pace: Pace, nowMs: number, dailyAtMin: number, zone: string): number {
	if (pace === 'hourly') return Math.ceil(nowMs / HOUR_MS) * HOUR_MS;
	if (pace !== 'daily') return nowMs;
	const wall = localInput(nowMs, zone);
	const day = minutesOf(wall) < dailyAtMin ? wall.slice(0, 10) : dayAfter(wall);
	return instantOf(`${day}T${clock(dailyAtMin)}`, zone) ?? nowMs + DAY_MS;
}

/** When a person is mailed of a kind that came up now; null = not at all. `urged`: an escalation, whatever the pace. */
export function dueMs(
	settings: MailSettings,
	kind: NoticeKind,
	o: { nowMs: number; zone: string; urged: boolean }
): number | null {
	if (settings.off) return null;
	const pace = settings.paces[kind];
	if (pace === 'never' && !o.urged) return null;
	if (mailedAtAnyHour(kind) && (pace === 'at_once' || o.urged)) return o.nowMs;
	const atMs = o.urged ? o.nowMs : digestMs(pace, o.nowMs, settings.dailyAtMin, o.zone);
	return afterQuiet(atMs, settings, o.zone);
}
