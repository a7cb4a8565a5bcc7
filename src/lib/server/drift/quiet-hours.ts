/** Minute of the local day, 0 to 1439; null where the time zone is not known here. */
function localMinute(atMs: number, timezone: string): number | null {
	try {
		const parts = new Intl.DateTimeFormat('en-GB', {
			...{ timeZone: timezone, hour: '2-digit', minute: '2-digit', hourCycle: 'h23' }
		}).formatToParts(atMs);
		const of = (type: 'hour' | 'minute') =>
			Number(parts.find((part) => part.type === type)?.value ?? NaN);
		return of('hour') * 60 + of('minute');
	} catch {
		return null;
	}
}

/** Whether pulses may be fired by rule now: [from, to) in local minutes; a window over midnight wraps. */
export function inQuietHours(
	atMs: number,
	{
		timezone,
		quietFromMin,
		quietToMin
	}: { timezone: string; quietFromMin: number; quietToMin: number }
): boolean {
	const minute = localMinute(atMs, timezone);
	if (minute === null) return false;
	return quietFromMin <= quietToMin
		? minute >= quietFromMin && minute < quietToMin
		: minute >= quietFromMin || minute < quietToMin;
}
