import { words } from './messages';

const SECOND_MS = 1000;
const MINUTE_MS = 60 * SECOND_MS;
const HOUR_MS = 60 * MINUTE_MS;
const DAY_MS = 24 * HOUR_MS;

/** A length of time as people say it: '38 s', '12 min', '1 h 17 min', '3 d 4 h'. Negative counts as 0. */
export function duration(lengthMs: number): string {
	const ms = Math.max(0, lengthMs);
	const unit = words().duration;
	if (ms < MINUTE_MS) return `${Math.floor(ms / SECOND_MS)} ${unit.second}`;
	if (ms < HOUR_MS) return `${Math.floor(ms / MINUTE_MS)} ${unit.minute}`;
	if (ms < DAY_MS) return pair(ms, HOUR_MS, unit.hour, MINUTE_MS, unit.minute);
	return pair(ms, DAY_MS, unit.day, HOUR_MS, unit.hour);
}

function pair(ms: number, bigMs: number, big: string, smallMs: number, small: string): string {
	const rest = Math.floor((ms % bigMs) / smallMs);
	return `${Math.floor(ms / bigMs)} ${big}${rest === 0 ? '' : ` ${rest} ${small}`}`;
}

/** How long ago an instant was: '38 s ago', 'just now' under 2 s, 'never' when there is none. */
export function ago(atMs: number | null, nowMs: number): string {
	const said = words().duration;
	if (atMs === null) return said.never;
	const ageMs = nowMs - atMs;
	return ageMs < 2 * SECOND_MS ? said.justNow : said.ago(duration(ageMs));
}
