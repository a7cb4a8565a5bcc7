import { milligauss } from '$lib/format/field';
import { capital } from '$lib/format/words';
import type { DriftRow } from '$lib/schemas/desk-drift';

/** Short names of causes for lists and filters. */
export const CAUSE_NAMES: Readonly<Record<string, string>> = {
	temperature: 'temperature',
	geomagnetic: 'geomagnetic weather',
	bridge: 'bridge offset',
	film: 'film',
	gain_or_field: 'gain or field',
	tilt: 'tilt',
	steel_or_works: 'steel or works',
	unexplained: 'not explained'
};

/** '12 to 30 days', 'under 1 day', '9 days or never'; null where nothing is on its way to a limit. */
export function daysText(days: DriftRow['daysToLimit']): string | null {
	if (days === null) return null;
	const whole = (d: number) => Math.max(0, Math.round(d));
	const from = days.from < 1 ? 'under 1' : String(whole(days.from));
	if (days.to === null) return `${from} days or never`;
	if (days.to < 1) return 'under 1 day';
	const to = whole(days.to);
	return from === String(to) ? `about ${to} ${to === 1 ? 'day' : 'days'}` : `${from} to ${to} days`;
}

/** '0.8 mG a day', and whether it is more than chance. */
export function rateText(row: Pick<DriftRow, 'ratePerDayMg' | 'trend'>): string {
	if (row.ratePerDayMg === null) return 'under 5 days known';
	if (!row.trend) return 'no trend';
	return `${milligauss(row.ratePerDayMg)} a day`;
}

/** What moved it, in a sentence; what cannot be judged says why. */
export function causeText(row: Pick<DriftRow, 'cause' | 'notes' | 'hour'>): string {
	if (row.hour === null) return 'No hour judged yet';
	if (row.cause === null) {
		const [first] = row.notes;
		return first === undefined ? 'Nothing moved' : capital(first.says);
	}
	return `${capital(row.cause.says)}, ${milligauss(row.cause.magnitudeMg)}`;
}

/** Unexplained, with what is sure of it. */
export function unexplainedText(row: Pick<DriftRow, 'partsMg' | 'sureMg'>): string {
	if (row.partsMg === null) return 'not judged';
	const sure = row.sureMg === null ? 'cannot be judged' : `${milligauss(row.sureMg)} sure`;
	return `${milligauss(row.partsMg.unexplained)}, ${sure}`;
}
