import { words } from './messages';

/** Instants as text in a site's time zone. 24 h clock; dates by Intl, English with day before month. */
const kept = new Map<string, Intl.DateTimeFormat>();

function formatter(name: string, timeZone: string, options: Intl.DateTimeFormatOptions) {
	const { locale } = words();
	const key = `${name} ${timeZone} ${locale}`;
	let format = kept.get(key);
	if (format === undefined) {
		format = new Intl.DateTimeFormat(locale, { timeZone, hourCycle: 'h23', ...options });
		kept.set(key, format);
	}
	return format;
}

/** '07:55' */
export const clockTime = (atMs: number, timeZone: string) =>
	formatter('clock', timeZone, { hour: '2-digit', minute: '2-digit' }).format(atMs);

/** '07:55:31' */
export const clockTimeS = (atMs: number, timeZone: string) =>
	formatter('clockS', timeZone, {
		hour: '2-digit',
		minute: '2-digit',
		second: '2-digit'
	}).format(atMs);

/** '3 Mar 2026' */
export const date = (atMs: number, timeZone: string) =>
	formatter('date', timeZone, { day: 'numeric', month: 'short', year: 'numeric' }).format(atMs);

/** '3 Mar' in the year of `nowMs`, else with the year. */
export function shortDate(atMs: number, timeZone: string, nowMs: number): string {
	const year = formatter('year', timeZone, { year: 'numeric' });
	if (year.format(atMs) !== year.format(nowMs)) return date(atMs, timeZone);
	return formatter('short', timeZone, { day: 'numeric', month: 'short' }).format(atMs);
}

/** '07:55' today, '3 Mar 07:55' on another day. */
export function moment(atMs: number, timeZone: string, nowMs: number): string {
	const time = clockTime(atMs, timeZone);
	if (date(atMs, timeZone) === date(nowMs, timeZone)) return time;
	return `${shortDate(atMs, timeZone, nowMs)} ${time}`;
}

/** '3 Mar 2026 07:55:31 CET (UTC+1)': everything, for a hover or a print. */
export function exact(atMs: number, timeZone: string): string {
	return `${date(atMs, timeZone)} ${clockTimeS(atMs, timeZone)} ${zoneName(atMs, timeZone)}`;
}

/** The zone at that instant: 'CET', or 'GMT-3' where it has no short name; '(UTC+1)' is added to names. */
export function zoneName(atMs: number, timeZone: string): string {
	const part = (style: 'short' | 'shortOffset') =>
		formatter(`zone ${style}`, timeZone, { timeZoneName: style })
			.formatToParts(atMs)
			.find((p) => p.type === 'timeZoneName')?.value ?? timeZone;
	const [name, offset] = [part('short'), part('shortOffset').replace('GMT', 'UTC')];
	return name.startsWith('GMT') || name === 'UTC'
		? name.replace('GMT', 'UTC')
		: `${name} (${offset})`;
}

/** The value of a datetime-local input for an instant, in the site's zone. */
export function localInput(atMs: number, timeZone: string): string {
	const parts = Object.fromEntries(
		formatter('input', timeZone, {
			year: 'numeric',
			month: '2-digit',
			day: '2-digit',
			hour: '2-digit',
			minute: '2-digit'
		})
			.formatToParts(atMs)
			.map((p) => [p.type, p.value])
	);
	return `${parts['year']}-${parts['month']}-${parts['day']}T${parts['hour']}:${parts['minute']}`;
}

/** The instant that a wall time ('2026-03-03T07:55') means in a zone; null when it cannot be read. */
export function instantOf(wall: string, timeZone: string): number | null {
	if (!/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}$/.test(wall)) return null;
	const asUtcMs = Date.parse(`${wall}:00Z`);
	if (Number.isNaN(asUtcMs)) return null;
	// Two rounds settle the offset also beside a change of the clocks.
	let atMs = asUtcMs;
	for (let round = 0; round < 2; round += 1) {
		const shownMs = Date.parse(`${localInput(atMs, timeZone)}:00Z`);
		atMs += asUtcMs - shownMs;
	}
	return atMs;
}
