import { milligauss } from '$lib/format/field';
import { named } from '$lib/format/messages';
import { driftSays, driftWords } from '$lib/format/messages/drift';
import { capital } from '$lib/format/words';
import type { DriftRow } from '$lib/schemas/desk-drift';

/** Short name of a cause for lists and filters. */
export const causeName = (cause: string): string => named(driftWords().causes, cause) ?? cause;

/** '12 to 30 days', 'under 1 day', '9 days or never'; null where nothing is on its way to a limit. */
export function daysText(days: DriftRow['daysToLimit']): string | null {
	if (days === null) return null;
	const said = driftWords();
	const whole = (d: number) => Math.max(0, Math.round(d));
	const from = days.from < 1 ? said.under : String(whole(days.from));
	if (days.to === null) return said.orNever(from);
	if (days.to < 1) return said.underDay;
	const to = whole(days.to);
	return from === String(to) ? said.about(to) : said.days(from, to);
}

/** '0.8 mG a day', and whether it is more than chance. */
export function rateText(row: Pick<DriftRow, 'ratePerDayMg' | 'trend'>): string {
	if (row.ratePerDayMg === null) return driftWords().fewDays;
	if (!row.trend) return driftWords().noTrend;
	return driftWords().aDay(milligauss(row.ratePerDayMg));
}

/** What moved it, in a sentence; what cannot be judged says why. */
export function causeText(row: Pick<DriftRow, 'cause' | 'notes' | 'hour'>): string {
	if (row.hour === null) return driftWords().noHourJudged;
	if (row.cause === null) {
		const [first] = row.notes;
		return first === undefined ? driftWords().nothingMoved : capital(driftSays(first.says));
	}
	return `${capital(driftSays(row.cause.says))}, ${milligauss(row.cause.magnitudeMg)}`;
}

/** Unexplained, with what is sure of it. */
export function unexplainedText(row: Pick<DriftRow, 'partsMg' | 'sureMg'>): string {
	if (row.partsMg === null) return driftWords().notJudged;
	const sure =
		row.sureMg === null ? driftWords().cannot : driftWords().sure(milligauss(row.sureMg));
	return `${milligauss(row.partsMg.unexplained)}, ${sure}`;
}
