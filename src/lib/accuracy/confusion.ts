import { matthews, type Table } from '$lib/numeric/mcc';
import { shareOf, type BayCount, type Share } from './share';

/** One look at a bay by a person, beside what was said of it at that time. */
export interface Look {
	bay: string;
	truth: 'occupied' | 'vacant';
	said: 'occupied' | 'vacant' | 'unknown';
	/** Names the stay or gap that was looked at; one looked at twice counts once. */
	spell: string;
	/** Within 60 s of a change, said or true: the person may have been first. Stands apart. */
	nearChange: boolean;
	/** Why it went wrong, where somebody knows. */
	cause: string | null;
}

export interface Figures {
	table: Table;
	sensitivity: Share;
	specificity: Share;
	positivePredictive: Share;
	negativePredictive: Share;
	right: Share;
	matthews: number;
}

export interface AccuracyReport {
	/** Looks as taken, and what is left of them. */
	looks: number;
	counted: number;
	repeated: number;
	nearChange: { n: number; right: number };
	unknown: { n: number; ofOccupied: number; ofVacant: number };
	/** Unknown is counted twice over: left out, and as wrong (method 9). Both are printed. */
	unknownLeftOut: Figures;
	unknownAsWrong: Figures;
	/** Wrong looks by bay and by cause, most first. */
	missesByBay: Tally[];
	falseCallsByBay: Tally[];
	byCause: Tally[];
}

export interface Tally {
	name: string;
	n: number;
}

/** The first look of each spell that saw and said the same. */
function once(looks: readonly Look[]): Look[] {
	const seen = new Map<string, Look>();
	for (const look of looks) {
		const key = JSON.stringify([look.bay, look.spell, look.truth, look.said]);
		if (!seen.has(key)) seen.set(key, look);
	}
	return [...seen.values()];
}

/** Unknown as wrong: as if the opposite of the truth had been said. */
function asWrong(look: Look): Look {
	if (look.said !== 'unknown') return look;
	return { ...look, said: look.truth === 'occupied' ? 'vacant' : 'occupied' };
}

const isRight = (look: Look): boolean => look.truth === look.said;

/** Hits of those looks that `counts` picks, by bay. */
function byBay(looks: readonly Look[], counts: (look: Look) => boolean): BayCount[] {
	const bays = new Map<string, BayCount>();
	for (const look of looks) {
		if (!counts(look)) continue;
		const bay = bays.get(look.bay) ?? { hits: 0, n: 0 };
		bays.set(look.bay, { hits: bay.hits + (isRight(look) ? 1 : 0), n: bay.n + 1 });
	}
	return [...bays.values()];
}

/** Counts of known looks: positive = occupied. */
export function confusionTable(looks: readonly Look[]): Table {
	const count = (truth: Look['truth'], said: Look['said']) =>
		looks.filter((look) => look.truth === truth && look.said === said).length;
	return {
		truePositive: count('occupied', 'occupied'),
		trueNegative: count('vacant', 'vacant'),
		falsePositive: count('vacant', 'occupied'),
		falseNegative: count('occupied', 'vacant')
	};
}

function figuresOf(looks: readonly Look[], seed: number): Figures {
	const share = (counts: (look: Look) => boolean) => shareOf(byBay(looks, counts), seed);
	const table = confusionTable(looks);
	return {
		table,
		sensitivity: share((look) => look.truth === 'occupied'),
		specificity: share((look) => look.truth === 'vacant'),
		positivePredictive: share((look) => look.said === 'occupied'),
		negativePredictive: share((look) => look.said === 'vacant'),
		right: share(() => true),
		matthews: matthews(table)
	};
}

function tally(names: readonly string[]): Tally[] {
	const counts = new Map<string, number>();
	for (const name of names) counts.set(name, (counts.get(name) ?? 0) + 1);
	return [...counts]
		.map(([name, n]) => ({ name, n }))
		.sort((a, b) => (b.n === a.n ? a.name.localeCompare(b.name) : b.n - a.n));
}

function unknownCounts(looks: readonly Look[]): AccuracyReport['unknown'] {
	const unknown = looks.filter((look) => look.said === 'unknown');
	const ofOccupied = unknown.filter((look) => look.truth === 'occupied').length;
	return { n: unknown.length, ofOccupied, ofVacant: unknown.length - ofOccupied };
}

/** The accuracy of what was said, against looks (method 9). The seed fixes the resampling of bays. */
export function accuracyReport(looks: readonly Look[], seed: number): AccuracyReport {
	const apart = looks.filter((look) => look.nearChange);
	const settled = looks.filter((look) => !look.nearChange);
	const counted = once(settled);
	const known = counted.filter((look) => look.said !== 'unknown');
	const wrong = known.filter((look) => !isRight(look));
	const bays = (truth: Look['truth']) =>
		wrong.filter((look) => look.truth === truth).map((look) => look.bay);
	return {
		looks: looks.length,
		counted: counted.length,
		repeated: settled.length - counted.length,
		nearChange: { n: apart.length, right: apart.filter(isRight).length },
		unknown: unknownCounts(counted),
		unknownLeftOut: figuresOf(known, seed),
		unknownAsWrong: figuresOf(counted.map(asWrong), seed),
		missesByBay: tally(bays('occupied')),
		falseCallsByBay: tally(bays('vacant')),
		byCause: tally(wrong.map((look) => look.cause ?? 'not known'))
	};
}
