import { expect, test } from 'vitest';
import { isLocked } from './kept';

const HOUR_MS = 3_600_000;
const CONTACT_MS = Date.UTC(2026, 2, 3, 7);

// Issue 4, 'Phone': locks after 72 h without contact.
test('what is kept is open for 72 h after the last answer and locked from then on', () => {
	expect(isLocked(CONTACT_MS, CONTACT_MS)).toBe(false);
	expect(isLocked(CONTACT_MS, CONTACT_MS + 72 * HOUR_MS)).toBe(false);
	expect(isLocked(CONTACT_MS, CONTACT_MS + 72 * HOUR_MS + 1)).toBe(true);
});
test('a clock set back does not open it', () => {
	expect(isLocked(CONTACT_MS, CONTACT_MS - 2 * HOUR_MS)).toBe(true);
	expect(isLocked(CONTACT_MS, CONTACT_MS - 30_000)).toBe(false);
});
