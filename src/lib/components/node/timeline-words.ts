import { milligauss } from '$lib/format/field';
import { moment } from '$lib/format/time';
import { duration } from '$lib/format/duration';
import { eventWord, plain, stateWord, type State } from '$lib/format/words';

/** A row of GET /api/desk/sites/{site}/bays/{code}/timeline. */
export interface TimelineItem {
	atMs: number;
	what: string;
	by: string | null;
	serial: string | null;
	detail: Record<string, string | number | boolean | null>;
}

const SETTLED: Record<string, string> = {
	seen_vacant: 'seen free',
	told_vacant: 'told free',
	seen_occupied: 'seen taken'
};
const ACTS: Record<string, string> = {
	act_place: 'node placed',
	act_accept: 'reference accepted',
	act_withdraw: 'node withdrawn',
	act_undo_settle: 'settling undone',
	act_lift: 'closure ended early',
	act_parameters: 'settings of the node changed',
	act_accept_boot: 'boot counter accepted anew',
	act_ask: 'node asked'
};
const OUTCOMES = ['done', 'refused', 'failed'];

/** One line of the timeline in words. */
export function timelineSentence(item: TimelineItem, timezone: string, nowMs: number): string {
	const { what, detail } = item;
	const local = (value: unknown) => moment(Number(value), timezone, nowMs);
	if (what.startsWith('act_')) return actSentence(item, timezone, nowMs);
	if (what.startsWith('command_')) {
		const outcome =
			detail['outcome'] === null ? 'no answer yet' : (OUTCOMES[Number(detail['outcome'])] ?? '');
		const why = detail['reason'] === null ? '' : `, ${String(detail['reason'])}`;
		return `command ‘${what.slice('command_'.length)}’ (${plain(String(detail['cause']))}): ${outcome}${why}`;
	}
	if (what.startsWith('pulse_')) return pulseSentence(item);
	switch (what) {
		case 'reference':
			return `quiet field learned from ${detail['readings']} readings, noise ${milligauss(Number(detail['sigmaMg']))}${detail['accepted'] === true ? (detail['provisional'] === true ? ', accepted by rule' : ', accepted') : ', not accepted yet'}`;
		case 'boot':
			return `node booted (${detail['cause'] ?? 'cause not said'}), firmware ${detail['firmware'] ?? 'not said'}`;
		case 'closure_end':
			return `closure over: ${plain(String(detail['finding']))}`;
		case 'request':
			return `somebody sent for: ${String(detail['reason'])}`;
		case 'request_end':
			return `seen to: ${String(detail['outcome'])}`;
		case 'voided':
			return `taken back: what was said as no. ${detail['voids']} did not happen`;
		default: {
			const late = detail['late'] === true ? ', found late' : '';
			const about =
				Number(detail['uncertaintyS']) >= 60
					? ` ± ${duration(Number(detail['uncertaintyS']) * 1000)}`
					: '';
			return `${eventWord(what)}: ${stateWord(detail['state'] as State)} from ${local(detail['at'])}${about}${late}`;
		}
	}
}

function actSentence({ what, detail }: TimelineItem, timezone: string, nowMs: number): string {
	const args = readArgs(detail['args']);
	const outcome = detail['outcome'];
	const tail =
		outcome === null ? ', waiting' : outcome === 'done' ? '' : `, ${plain(String(outcome))}`;
	if (what === 'act_settle') return `settled: ${SETTLED[String(args['as'])] ?? ''}${tail}`;
	if (what === 'act_close')
		return `closed until ${moment(Number(args['toMs']), timezone, nowMs)}: ${String(args['reason'])}${tail}`;
	return `${ACTS[what] ?? plain(what)}${tail}`;
}

function pulseSentence({ what, detail }: TimelineItem): string {
	const name =
		what === 'pulse_pair'
			? 'SET/RESET pair'
			: what === 'pulse_ack'
				? 'pulse on command'
				: 'power-on SET';
	if (detail['accepted'] === true) return `${name}, taken into use`;
	if (detail['accepted'] === false) return `${name}, not used: ${plain(String(detail['refusal']))}`;
	return `${name}, not judged yet`;
}

function readArgs(text: unknown): Record<string, unknown> {
	if (typeof text !== 'string') return {};
	try {
		return JSON.parse(text) as Record<string, unknown>;
	} catch {
		return {};
	}
}

/** When a person last saw the bay, and what they saw; null when nobody did. */
export function lastSeen(items: readonly TimelineItem[]): { atMs: number; state: State } | null {
	for (const { what, detail } of items) {
		const as = what === 'act_settle' ? readArgs(detail['args'])['as'] : null;
		if (as === 'seen_vacant') return { atMs: Number(detail['at']), state: 'vacant' };
		if (as === 'seen_occupied') return { atMs: Number(detail['at']), state: 'occupied' };
	}
	return null;
}
