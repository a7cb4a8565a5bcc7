import { milligauss } from '$lib/format/field';
import { named } from '$lib/format/messages';
import { dossierWords } from '$lib/format/messages/dossier';
import { visitsWords } from '$lib/format/messages/visits';
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

/** One line of the timeline in words. */
export function timelineSentence(item: TimelineItem, timezone: string, nowMs: number): string {
	const { what, detail } = item;
	const said = dossierWords().time;
	const local = (value: unknown) => moment(Number(value), timezone, nowMs);
	if (what.startsWith('act_')) return actSentence(item, timezone, nowMs);
	if (what.startsWith('command_')) {
		const outcome =
			detail['outcome'] === null ? said.noAnswer : (said.outcomes[Number(detail['outcome'])] ?? '');
		const why = detail['reason'] === null ? '' : `, ${String(detail['reason'])}`;
		const name = what.slice('command_'.length);
		return said.command(name, valueText(detail['cause']), outcome) + why;
	}
	if (what.startsWith('pulse_')) return pulseSentence(item);
	switch (what) {
		case 'reference':
			return `${said.learned(String(detail['readings']), milligauss(Number(detail['sigmaMg'])))}, ${detail['accepted'] === true ? (detail['provisional'] === true ? said.byRule : said.accepted) : said.notAccepted}`;
		case 'boot':
			return said.boot(textOf(detail['cause']), textOf(detail['firmware']));
		case 'closure_end':
			return said.closureOver(valueText(detail['finding']));
		case 'request':
			return said.request(String(detail['reason']));
		case 'request_end':
			return said.seenTo(String(detail['outcome']));
		case 'visit':
			return visitSentence(item);
		case 'voided':
			return said.voided(String(detail['voids']));
		default: {
			const late = detail['late'] === true ? `, ${said.late}` : '';
			const about =
				Number(detail['uncertaintyS']) >= 60
					? ` ± ${duration(Number(detail['uncertaintyS']) * 1000)}`
					: '';
			const head = said.event(
				eventWord(what),
				stateWord(detail['state'] as State),
				local(detail['at'])
			);
			return head + about + late;
		}
	}
}

/** What came of a stop of a walk. */
function visitSentence({ detail }: TimelineItem): string {
	const { outcome, walk } = visitsWords();
	const word = named(outcome, String(detail['outcome'])) ?? String(detail['outcome']);
	const note = String(detail['note'] ?? '');
	return walk.timeline(String(detail['visit']), note === '' ? word : `${word}: ${note}`);
}

/** A cause or a refusal as the API says it, in words. */
const valueText = (value: unknown) =>
	named(dossierWords().time.values, String(value)) ?? plain(String(value));
const textOf = (value: TimelineItem['detail'][string] | undefined) =>
	value == null ? null : String(value);

function actSentence({ what, detail }: TimelineItem, timezone: string, nowMs: number): string {
	const said = dossierWords().time;
	const args = readArgs(detail['args']);
	const outcome = detail['outcome'];
	const tail =
		outcome === null ? `, ${said.waiting}` : outcome === 'done' ? '' : `, ${valueText(outcome)}`;
	if (what === 'act_settle')
		return said.settledAs(named(said.settled, String(args['as'])) ?? '') + tail;
	if (what === 'act_close')
		return (
			said.closed(moment(Number(args['toMs']), timezone, nowMs), String(args['reason'])) + tail
		);
	return (named(said.acts, what) ?? plain(what)) + tail;
}

function pulseSentence({ what, detail }: TimelineItem): string {
	const said = dossierWords().time;
	const name = named(said.pulse, what) ?? said.pulse.pulse_power;
	if (detail['accepted'] === true) return `${name}, ${said.used}`;
	if (detail['accepted'] === false) return `${name}, ${said.notUsed(valueText(detail['refusal']))}`;
	return `${name}, ${said.notJudged}`;
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
