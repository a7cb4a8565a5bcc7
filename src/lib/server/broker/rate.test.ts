import { expect, test } from 'vitest';
import { RateBucket } from './rate';

const takeAll = (bucket: RateBucket, nowMs: number): number => {
	let taken = 0;
	while (bucket.take(nowMs)) taken++;
	return taken;
};

test('one second of messages passes at once, then the rate', () => {
	const bucket = new RateBucket(200, 0);
	expect(takeAll(bucket, 0)).toBe(200);
	expect(takeAll(bucket, 100)).toBe(20);
	expect(takeAll(bucket, 1_100)).toBe(200);
	// Ten quiet seconds do not add up.
	expect(takeAll(bucket, 11_100)).toBe(200);
});

test('after the wait it names there is something to take', () => {
	for (const perS of [0.5, 1, 3, 200, 100_000]) {
		const bucket = new RateBucket(Math.max(1, perS), 0);
		takeAll(bucket, 0);
		expect(bucket.take(bucket.waitMs())).toBe(true);
	}
});

test('a clock set back gives and takes nothing', () => {
	const bucket = new RateBucket(10, 5_000);
	takeAll(bucket, 5_000);
	expect(bucket.take(1_000)).toBe(false);
	expect(takeAll(bucket, 1_500)).toBe(5);
});
