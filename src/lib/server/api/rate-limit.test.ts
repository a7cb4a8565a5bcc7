import { expect, test } from 'vitest';
import { rateFields, RateLimiter, type Policy } from './rate-limit';

const burst: Policy = { name: 'burst', requests: 3, windowS: 60 };

test('the fields read as in the draft (check-values 9j)', () => {
	const verdict = { allowed: true, policy: { ...burst, requests: 100 }, remaining: 50, resetS: 30 };
	expect(rateFields(verdict)).toEqual({
		'ratelimit-policy': '"burst";q=100;w=60',
		ratelimit: '"burst";r=50;t=30'
	});
});

test('the one over the limit is refused until the window ends', () => {
	const limiter = new RateLimiter();
	const at = (ms: number) => limiter.take('a', burst, ms);
	expect([at(0), at(1), at(2)].map((v) => v.remaining)).toEqual([2, 1, 0]);
	expect(at(30_000)).toMatchObject({ allowed: false, remaining: 0, resetS: 30 });
	expect(at(60_000)).toMatchObject({ allowed: true, remaining: 2, resetS: 60 });
});

test('one caller does not use up what another has', () => {
	const limiter = new RateLimiter();
	for (let i = 0; i < 4; i++) limiter.take('a', burst, 0);
	expect(limiter.take('b', burst, 0).allowed).toBe(true);
});
