import { duration } from '$lib/format/duration';
import { words } from '$lib/format/messages';
import { exact, moment } from '$lib/format/time';
import { confidenceWord, plain, stateWord } from '$lib/format/words';
import { closedNow, markOf, markText, needOf } from './marks';
import type { BayItem, PlanLayout } from './types';

/** 'was taken 08:12' under not known; null where it was never known. */
export function wasText(bay: BayItem, timezone: string, nowMs: number): string | null {
	if (bay.state !== 'unknown' || bay.lastKnown === null) return null;
	const at = moment(Date.parse(bay.lastKnown.at), timezone, nowMs);
	return words().plan.was(stateWord(bay.lastKnown.state), at);
}

/** 'taken since 07:55 (1 h 17 min), sure' */
export function stateSentence(bay: BayItem, timezone: string, nowMs: number): string {
	if (closedNow(bay, nowMs) && bay.closed !== null) {
		const until = moment(Date.parse(bay.closed.to), timezone, nowMs);
		return words().plan.closedUntil(until, bay.closed.reason);
	}
	if (bay.condition === 'withdrawn') return words().plan.withdrawn;
	const parts = [stateWord(bay.state)];
	if (bay.since !== null) {
		const sinceMs = Date.parse(bay.since);
		parts[0] = words().plan.since(
			stateWord(bay.state),
			moment(sinceMs, timezone, nowMs),
			duration(nowMs - sinceMs)
		);
	}
	const sure = confidenceWord(bay.confidence);
	if (sure !== null) parts.push(sure);
	const was = wasText(bay, timezone, nowMs);
	if (was !== null) parts.push(was);
	return parts.join(', ');
}

/** 'B07, North, row 3, 7 of 24, taken since 07:55, doubtful: …' for the grid behind the drawing. */
export function spokenBay(
	layout: PlanLayout,
	at: number,
	bay: BayItem | undefined,
	zoneName: string,
	timezone: string,
	nowMs: number
): string {
	const row = layout.rows[layout.rowOfBay[at] ?? 0];
	const code = layout.bays[at]?.code ?? '';
	const parts = [code, zoneName];
	if (row !== undefined)
		parts.push(
			words().plan.row(row.number),
			words().plan.ofRow(row.bays.indexOf(at) + 1, row.bays.length)
		);
	if (bay === undefined) return [...parts, stateWord('unknown')].join(', ');
	parts.push(stateSentence(bay, timezone, nowMs));
	if (bay.doubt !== null) parts.push(words().plan.doubtfulFor(plain(bay.doubt.reason)));
	else {
		const need = needOf(bay, nowMs);
		if (need !== null) parts.push(need);
	}
	return parts.join(', ');
}

/** What changed between two looks at the bays, as one sum: '3 taken, 1 free, 1 doubtful'. */
export function changeSum(
	before: ReadonlyMap<string, BayItem>,
	after: ReadonlyMap<string, BayItem>,
	nowMs: number
): string | null {
	const sums = new Map<string, number>();
	const add = (word: string) => sums.set(word, (sums.get(word) ?? 0) + 1);
	for (const [code, bay] of after) {
		const old = before.get(code);
		if (old === undefined || old === bay) continue;
		const [was, is] = [markOf(old, nowMs), markOf(bay, nowMs)];
		if (was !== is) add(markText(is));
		if (old.doubt === null && bay.doubt !== null) add(words().plan.doubtful);
	}
	if (sums.size === 0) return null;
	return [...sums].map(([word, n]) => `${n} ${word}`).join(', ');
}

export const exactTime = (iso: string, timezone: string) => exact(Date.parse(iso), timezone);
