/** What people read for the API's values. One voice: short, exact, no jargon beyond the trade's. */
export type State = 'occupied' | 'vacant' | 'unknown';

const STATE_WORDS: Record<State, string> = {
	occupied: 'taken',
	vacant: 'free',
	unknown: 'not known'
};
export const stateWord = (state: State) => STATE_WORDS[state];
export const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

const CONDITION_WORDS: Record<string, { word: string; sentence: string }> = {
	withdrawn: { word: 'withdrawn', sentence: 'taken out of service' },
	unplaced: { word: 'no node', sentence: 'no node placed here' },
	learning: { word: 'learning', sentence: 'finding its quiet field' },
	silent: { word: 'silent', sentence: 'not heard' },
	inverted: { word: 'inverted', sentence: 'film flipped; state still right' },
	clipped: {
		word: 'clipped',
		sentence: 'a magnet or steel overloads it; not known until it ends'
	},
	refresh_due: { word: 'film refresh due', sentence: 'the film needs a pulse' },
	drifting: { word: 'drifting', sentence: 'the quiet field is moving; states still good' },
	in_service: { word: 'in service', sentence: 'heard and believed' }
};
const MARK_WORDS: Record<string, string> = {
	clock_off: 'clock off: its times are shifted to arrival',
	unsigned: 'unsigned messages allowed',
	low_cell: 'low cell',
	fast_reporting: 'reporting fast',
	provisional: 'reference provisional'
};

export const conditionWord = (condition: string) =>
	CONDITION_WORDS[condition]?.word ?? plain(condition);
/** 'the film needs a pulse'; a silent node says since when. */
export function conditionSentence(condition: string, silentSince: string | null = null): string {
	if (condition === 'silent' && silentSince !== null) return `not heard since ${silentSince}`;
	return CONDITION_WORDS[condition]?.sentence ?? plain(condition);
}
/** Marks beside the condition, and conditions kept as 'also'. */
export const markWord = (mark: string) => MARK_WORDS[mark] ?? conditionWord(mark);

/** 'sure' from 0.9, 'fairly sure' from 0.7, else 'unsure'; the figure stands in the dossier. */
export function confidenceWord(confidence: number | null): string | null {
	if (confidence === null) return null;
	if (confidence >= 0.9) return 'sure';
	return confidence >= 0.7 ? 'fairly sure' : 'unsure';
}

const EVENT_WORDS: Record<string, string> = {
	arrival: 'a vehicle came',
	departure: 'the vehicle left',
	unknown: 'no longer known',
	known: 'believed again',
	settled: 'settled by a person',
	voided: 'an earlier event taken back'
};
export const eventWord = (type: string) => EVENT_WORDS[type] ?? plain(type);

/** 'snake_case' from the API as words. */
export const plain = (value: string) => value.replaceAll('_', ' ');

export const ROLE_WORDS: Record<string, string> = {
	operator: 'operator',
	maintenance: 'maintenance',
	integrator: 'integrator',
	admin: 'admin'
};

/** '1 bay', '3 bays' */
export const count = (n: number, one: string, many = `${one}s`) => `${n} ${n === 1 ? one : many}`;
