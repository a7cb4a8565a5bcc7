/** What people read for the API's values. One voice: short, exact, no jargon beyond the trade's. */
import { named, words } from './messages';

export type State = 'occupied' | 'vacant' | 'unknown';

export const stateWord = (state: State) => words().state[state];
export const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

export const conditionWord = (condition: string) =>
	named(words().condition, condition) ?? plain(condition);
/** 'the film needs a pulse'; a silent node says since when. */
export function conditionSentence(condition: string, silentSince: string | null = null): string {
	if (condition === 'silent' && silentSince !== null) return words().silentSince(silentSince);
	return named(words().conditionSentence, condition) ?? plain(condition);
}
/** Marks beside the condition, and conditions kept as 'also'. */
export const markWord = (mark: string) => named(words().mark, mark) ?? conditionWord(mark);

/** 'sure' from 0.9, 'fairly sure' from 0.7, else 'unsure'; the figure stands in the dossier. */
export function confidenceWord(confidence: number | null): string | null {
	if (confidence === null) return null;
	const { sure, fairlySure, unsure } = words().confidence;
	if (confidence >= 0.9) return sure;
	return confidence >= 0.7 ? fairlySure : unsure;
}

export const eventWord = (type: string) => named(words().event, type) ?? plain(type);

/** A reason of a doubt, or another value of the API in 'snake_case', as words. */
export const plain = (value: string) => named(words().doubt, value) ?? value.replaceAll('_', ' ');

export const ROLE_WORDS: Readonly<Record<string, string>> = {
	get operator() {
		return words().role.operator;
	},
	get maintenance() {
		return words().role.maintenance;
	},
	get integrator() {
		return words().role.integrator;
	},
	get admin() {
		return words().role.admin;
	}
};

/** '1 bay', '3 bays'; a noun of the messages is said in the language that speaks. */
export function count(n: number, one: string, many = `${one}s`): string {
	const nouns = words().noun as Record<string, readonly string[]>;
	const [single, several] = Object.hasOwn(nouns, one) ? (nouns[one] ?? []) : [];
	return `${n} ${n === 1 ? (single ?? one) : (several ?? many)}`;
}

/** A sheet's name in the language that speaks; one without a word of its own stays as it is. */
export const sheetName = (name: string) => named(words().sheet, name) ?? name;
