import { expect, test } from 'vitest';
import { clockOf, isOpen, lifeWords, minuteOf, stateWords } from './words';

test('minutes of the day and clock times belong to each other', () => {
	for (const minute of [0, 59, 60, 300, 1439]) expect(minuteOf(clockOf(minute))).toBe(minute);
	expect(clockOf(65)).toBe('01:05');
	for (const bad of ['24:00', '1:00', '12:60', '']) expect(minuteOf(bad)).toBeNull();
});

test('an order is called off, and its five ends are closed', () => {
	expect(stateWords('called_off')).toBe('called off');
	const ends = ['proved', 'not_cured', 'refused', 'expired', 'called_off'];
	expect(ends.some(isOpen)).toBe(false);
	expect(isOpen('waiting')).toBe(true);
});

test('life of the cell in days from one day on, in minutes below', () => {
	expect(lifeWords(1.25)).toBe('1.3 days');
	// 0.05 d × 1440 min/d = 72 min.
	expect(lifeWords(0.05)).toBe('72 min');
});
