import { expect, test } from 'vitest';
import { judgeLive } from './live';

const T = 1_800_000_000_000;
const site = { graceS: 900, createdAtMs: T - 1e9 };
const heard = (agoMs: number | null, shortestPeriodS = 60) => ({
	siteId: 1,
	newestMs: agoMs === null ? null : T - agoMs,
	expected: 4,
	heard: 4,
	shortestPeriodS
});

test('live while the next message is not overdue', () => {
	expect(judgeLive(heard(179_000), site, T)).toMatchObject({ status: 'live', lateSinceMs: null });
});

test('late from three periods on, since when it was due', () => {
	expect(judgeLive(heard(200_000), site, T)).toMatchObject({
		status: 'late',
		lateSinceMs: T - 20_000
	});
});

test('lost after the grace time of the site', () => {
	expect(judgeLive(heard(901_000), site, T)).toMatchObject({
		status: 'lost',
		lateSinceMs: T - 721_000
	});
});

test('a site that waits for no node is never late', () => {
	expect(judgeLive({ ...heard(null), expected: 0 }, site, T).status).toBe('live');
});

test('nodes that were never heard are waited for since the site was made', () => {
	expect(judgeLive(heard(null), site, T)).toMatchObject({
		status: 'lost',
		asOfMs: site.createdAtMs
	});
});
