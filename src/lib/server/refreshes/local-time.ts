/** Wall clock of a site's zone. */
export interface LocalTime {
	/** 0 = Monday. */
	weekday: number;
	/** Minutes since midnight. */
	minute: number;
}

const WEEKDAYS = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun'];
const kept = new Map<string, Intl.DateTimeFormat>();

export function localTime(atMs: number, timeZone: string): LocalTime {
	let format = kept.get(timeZone);
	if (format === undefined) {
		format = new Intl.DateTimeFormat('en-GB', {
			timeZone,
			weekday: 'short',
			hour: '2-digit',
			minute: '2-digit',
			hourCycle: 'h23'
		});
		kept.set(timeZone, format);
	}
	const parts = Object.fromEntries(format.formatToParts(atMs).map((p) => [p.type, p.value]));
	return {
		weekday: WEEKDAYS.indexOf(parts['weekday'] ?? 'Mon'),
		minute: Number(parts['hour']) * 60 + Number(parts['minute'])
	};
}

/** Whether a minute of the day lies in [from, to), also over midnight; equal ends = the whole day. */
export function isWithin(minute: number, fromMin: number, toMin: number): boolean {
	if (fromMin === toMin) return true;
	return fromMin < toMin
		? minute >= fromMin && minute < toMin
		: minute >= fromMin || minute < toMin;
}
