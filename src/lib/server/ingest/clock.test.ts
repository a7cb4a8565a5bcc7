import { describe, expect, test } from 'vitest';
import { CLOCK, FLAG, placeInTime, type TimedMessage } from './clock';
import { SkewWindow } from './skew';

const NOW = Date.UTC(2026, 4, 1, 12);
const message = (over: Partial<TimedMessage>): TimedMessage => ({
	t: NOW - 5_000,
	lastDtMs: 0,
	sentMs: null,
	behind: false,
	arrivedAtMs: NOW,
	...over
});
const place = (over: Partial<TimedMessage>, skew = new SkewWindow()) =>
	placeInTime(message(over), skew);

/** Expected values follow protocol.md, 'What the server does with a message', step 4. */
describe('a message on the clock of the server', () => {
	test('a good clock is left alone', () => {
		expect(place({})).toEqual({ baseMs: NOW - 5_000, flags: 0, clockOff: false });
	});

	test('t = 0: the last row is at arrival, and nothing is said of the clock', () => {
		expect(place({ t: 0, lastDtMs: 9_000 })).toEqual({
			baseMs: NOW - 9_000,
			flags: FLAG.clockless,
			clockOff: null
		});
	});

	test('the last instant of 2019 is no clock, the first of 2020 is one', () => {
		expect(place({ t: CLOCK.firstSaneMs - 1 })).toMatchObject({
			baseMs: NOW,
			flags: FLAG.shifted,
			clockOff: true
		});
		expect(place({ t: CLOCK.firstSaneMs })).toMatchObject({
			baseMs: CLOCK.firstSaneMs,
			clockOff: null
		});
	});

	test('60 s ahead stays, one ms more is shifted as a whole', () => {
		expect(place({ t: NOW + 50_000, lastDtMs: 10_000 }).baseMs).toBe(NOW + 50_000);
		expect(place({ t: NOW + 50_001, lastDtMs: 10_000 })).toMatchObject({
			baseMs: NOW - 10_000,
			flags: FLAG.shifted,
			clockOff: true
		});
	});

	test('a skew of 60 s is none, of 60.001 s is taken out, either way', () => {
		expect(place({ t: NOW - 60_000, sentMs: NOW - 60_000 })).toMatchObject({
			baseMs: NOW - 60_000,
			clockOff: false
		});
		expect(place({ t: NOW - 60_001, sentMs: NOW - 60_001 })).toMatchObject({
			baseMs: NOW,
			flags: FLAG.shifted,
			clockOff: true
		});
		expect(place({ t: NOW + 3_600_000, sentMs: NOW + 3_600_000 })).toMatchObject({
			baseMs: NOW,
			flags: FLAG.shifted,
			clockOff: true
		});
	});

	test('a repeated message is shifted by the least skew known, not by its own', () => {
		const skew = new SkewWindow();
		skew.note(NOW - 3_600_000, 40);
		const late = place({ t: NOW - 7_200_000, sentMs: NOW - 7_200_000 }, skew);
		expect(late).toEqual({ baseMs: NOW - 7_200_000, flags: 0, clockOff: false });
	});

	test('without key 23 a backlog neither marks a clock nor clears it, a fresh row clears it', () => {
		expect(place({ t: NOW - 60_000 }).clockOff).toBeNull();
		expect(place({ t: NOW - 59_999 }).clockOff).toBe(false);
	});

	test('older than 14 days moves no state, 14 days to the ms does', () => {
		expect(place({ t: NOW - CLOCK.oldestMovingMs - 1 }).flags).toBe(FLAG.unmoving);
		expect(place({ t: NOW - CLOCK.oldestMovingMs }).flags).toBe(0);
	});

	test('a straggler without a usable clock moves nothing, one with a clock does', () => {
		expect(place({ t: 0, behind: true }).flags).toBe(FLAG.clockless | FLAG.unmoving);
		expect(place({ behind: true }).flags).toBe(0);
	});
});

describe('the skew of 24 hours', () => {
	const HOUR = 3_600_000;

	test('the least counts, and an hour drops out after a day', () => {
		const skew = new SkewWindow();
		skew.note(NOW, 500);
		skew.note(NOW + HOUR, 90);
		skew.note(NOW + HOUR + 5, 120);
		expect(skew.least(NOW + HOUR)).toBe(90);
		expect(skew.least(NOW + 24 * HOUR)).toBe(90);
		expect(skew.least(NOW + 26 * HOUR)).toBeNull();
	});

	test('stored and read back it says the same, in at most 240 bytes', () => {
		const skew = new SkewWindow();
		for (let h = 0; h < 60; h += 1) skew.note(NOW + h * HOUR, 1_000 - h - (h % 7) * 100);
		const bytes = skew.encode();
		expect(bytes.length).toBeLessThanOrEqual(240);
		const back = SkewWindow.decode(bytes);
		expect(back.least(NOW + 59 * HOUR)).toBe(skew.least(NOW + 59 * HOUR));
	});

	test('only a smaller figure or a new hour needs storing', () => {
		const skew = new SkewWindow();
		skew.note(NOW, 500);
		skew.changed = false;
		skew.note(NOW + 1_000, 501);
		expect(skew.changed).toBe(false);
		skew.note(NOW + 2_000, 499);
		expect(skew.changed).toBe(true);
	});
});
