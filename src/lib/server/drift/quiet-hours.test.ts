import { expect, test } from 'vitest';
import { inQuietHours } from './quiet-hours';

const night = { timezone: 'Europe/Vienna', quietFromMin: 60, quietToMin: 300 };

// Vienna is UTC+1 in January and UTC+2 in July: 01:00 local is 00:00 and 23:00 of the day before.
test('quiet hours are those of the site, in summer too', () => {
	expect(inQuietHours(Date.UTC(2026, 0, 5, 0, 0), night)).toBe(true);
	expect(inQuietHours(Date.UTC(2026, 0, 4, 23, 59), night)).toBe(false);
	expect(inQuietHours(Date.UTC(2026, 6, 4, 23, 0), night)).toBe(true);
	expect(inQuietHours(Date.UTC(2026, 6, 5, 3, 0), night)).toBe(false);
});

test('a window over midnight wraps', () => {
	const late = { timezone: 'Etc/UTC', quietFromMin: 1380, quietToMin: 120 };
	expect(inQuietHours(Date.UTC(2026, 0, 5, 23, 30), late)).toBe(true);
	expect(inQuietHours(Date.UTC(2026, 0, 5, 1, 59), late)).toBe(true);
	expect(inQuietHours(Date.UTC(2026, 0, 5, 12, 0), late)).toBe(false);
});

test('a time zone that is not known is never quiet', () => {
	expect(inQuietHours(0, { timezone: 'Nowhere/At_All', quietFromMin: 0, quietToMin: 1440 })).toBe(
		false
	);
});
