import { localTime } from './local-time';

/** A stretch of one bay's history. */
export interface Spell {
	state: 'vacant' | 'occupied' | 'unknown';
	fromMs: number;
	toMs: number;
}

const HOUR_MS = 3_600_000;
const HOURS = 24;
const WEEK = 7;
/** Hours known of a slot before it is believed: two weeks. */
const LEAST_KNOWN_H = 2;
/** Free for this share of the time counts as usually empty. */
const USUAL_SHARE = 0.75;
const MOST_TOLD = 2;
const NAMES = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun'];

interface Window {
	days: number[];
	fromH: number;
	toH: number;
}

/** Free and known hours of each hour of the week, in the site's zone. */
function tally(spells: readonly Spell[], timeZone: string) {
	const free = new Float64Array(WEEK * HOURS);
	const known = new Float64Array(WEEK * HOURS);
	for (const { state, fromMs, toMs } of spells) {
		if (state === 'unknown') continue;
		for (let atMs = fromMs; atMs < toMs;) {
			const endMs = Math.min(toMs, (Math.floor(atMs / HOUR_MS) + 1) * HOUR_MS);
			const { weekday, minute } = localTime(atMs, timeZone);
			const slot = weekday * HOURS + Math.floor(minute / 60);
			const hours = (endMs - atMs) / HOUR_MS;
			known[slot] = (known[slot] ?? 0) + hours;
			if (state === 'vacant') free[slot] = (free[slot] ?? 0) + hours;
			atMs = endMs;
		}
	}
	return { free, known };
}

/** Runs of usually empty hours of one day, [from, to). */
function runs(isEmpty: (hour: number) => boolean): [number, number][] {
	const found: [number, number][] = [];
	for (let h = 0; h < HOURS; h += 1) {
		if (!isEmpty(h)) continue;
		const last = found.at(-1);
		if (last?.[1] === h) last[1] = h + 1;
		else found.push([h, h + 1]);
	}
	return found;
}

function windows(spells: readonly Spell[], timeZone: string): Window[] {
	const { free, known } = tally(spells, timeZone);
	const list: Window[] = [];
	for (let day = 0; day < WEEK; day += 1) {
		const isEmpty = (h: number) => {
			const slot = day * HOURS + h;
			const n = known[slot] ?? 0;
			return n >= LEAST_KNOWN_H && (free[slot] ?? 0) / n >= USUAL_SHARE;
		};
		for (const [fromH, toH] of runs(isEmpty)) {
			const same = list.find((w) => w.fromH === fromH && w.toH === toH);
			if (same !== undefined) same.days.push(day);
			else list.push({ days: [day], fromH, toH });
		}
	}
	const weight = ({ days, fromH, toH }: Window) => days.length * (toH - fromH);
	return list.sort((a, b) => weight(b) - weight(a)).slice(0, MOST_TOLD);
}

function dayWords(days: readonly number[]): string {
	if (days.length === WEEK) return 'every day';
	const [first = 0] = days;
	const last = days.at(-1) ?? first;
	const inRow = last - first + 1 === days.length;
	if (days.length > 2 && inRow) return `${NAMES[first] ?? ''}–${NAMES[last] ?? ''}`;
	return days.map((day) => NAMES[day] ?? '').join(', ');
}

/**
 * When a bay is usually empty, from its history: 'mostly Tue 10–14 h'. Null while no hour of the week is
 * known twice and free for three quarters of the time.
 */
export function emptyWords(spells: readonly Spell[], timeZone: string): string | null {
	const list = windows(spells, timeZone);
	if (list.length === 0) return null;
	const words = list.map(({ days, fromH, toH }) => {
		const hours = toH - fromH === HOURS ? 'all day' : `${fromH}–${toH} h`;
		return `${dayWords(days)} ${hours}`;
	});
	return `mostly ${words.join('; ')}`;
}
