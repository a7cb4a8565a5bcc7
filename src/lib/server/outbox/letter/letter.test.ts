import { inflateSync } from 'node:zlib';
import { expect, test } from 'vitest';
import { speaking } from '$lib/server/auth/language';
import type { NoticeRow } from '$lib/server/store/queries/notice-letter';
import { driftPlot, PLOT } from './drift-plot';
import { drawHtml } from './html';
import type { Item } from './item';
import { compose, type LetterWanted } from './letter';
import { crc32 } from './png';
import { drawText } from './text';

const NOW = Date.parse('2026-12-01T10:00Z');
const row: NoticeRow = {
	...{ id: 1, kind: 'refresh_due', kinds: 'refresh_due,drifting', awaitsProof: 1, times: 1 },
	...{
		sinceMs: NOW - 3_600_000,
		openedAtMs: NOW,
		deadlineMs: NOW + 86_400_000,
		stage: 0,
		facts: '{}'
	},
	...{ takenBy: null, takenAtMs: null, takerName: null, takerInitials: null, snoozedUntilMs: null },
	...{ closedAtMs: null, closedHow: null, nodeId: 7, serial: 'N-0007', profile: 'amr-18-16384' },
	...{ bay: 'B07', personal: 0, geometry: null, zone: 'N', zoneName: 'North', siteId: 1 },
	...{
		site: 'tallow-yard',
		siteName: 'Tallow <Yard>',
		timezone: 'UTC',
		latDeg: 52.1,
		lonDeg: 11.6
	},
	...{ siteDemo: 0, scheduleOn: 0, scheduleReasons: null, quietFromMin: 60, quietToMin: 300 },
	refreshState: null
};
const item = (more: Partial<NoticeRow> = {}): Item => ({
	row: { ...row, ...more },
	facts: { unexplainedMg: 17, rateMgPerDay: 3.9, daysLeftLo: 3, daysLeftHi: 6 },
	...{ what: 'opened', detail: '', zone: 'UTC' }
});
const wanted = (items: Item[]): LetterWanted => ({
	...{ to: { name: 'Mads' }, site: { slug: 'tallow-yard', name: 'Tallow <Yard>' }, items },
	...{ zone: 'UTC', nowMs: NOW, origin: 'https://keep.example', plotCid: 'p@lodekeep' },
	markCid: 'm@lodekeep',
	...{ acknowledgeUrl: 'https://keep.example/acknowledge?token=a', unsubscribeUrl: 'https://u' }
});

test('the subject is that of the issue: bay, site, what, days left', () => {
	expect(compose(wanted([item()])).subject).toBe(
		'B07, Tallow <Yard>: film refresh due, 3 to 6 days left'
	);
});

test('it says enough to act on without signing in', () => {
	const text = drawText(compose(wanted([item()]))).replaceAll(/\s+/g, ' ');
	for (const part of [
		'17 mG unexplained, 3.9 mG a day more',
		'the drift goes on until the states turn wrong: 3 to 6 days left',
		'no rule will do it: it waits for a person',
		'<geo:52.10000,11.60000>',
		'https://keep.example/sites/tallow-yard/notices',
		'https://keep.example/acknowledge?token=a'
	])
		expect(text).toContain(part);
	const visit = drawText(compose(wanted([item({ kind: 'silent', kinds: 'silent' })])));
	expect(visit).toContain('a spare node of amr-18-16384');
});

test('in German the same mail is German, in subject, text and HTML', async () => {
	const letter = await speaking('de', async () => await Promise.resolve(compose(wanted([item()]))));
	expect(letter.subject).toBe('B07, Tallow <Yard>: Filmauffrischung fällig, noch 3 bis 6 Tage');
	const text = drawText(letter);
	expect(text).toContain('17 mG nicht erklärt, täglich 3,9 mG mehr');
	expect(text).toContain('Wo  ');
	expect(drawHtml(letter)).toContain('<html lang="de">');
});

test('whether a rule will do it tonight follows its hours, its reasons and what is under way', () => {
	const said = (more: Partial<NoticeRow>, reasons = ['unexplained']) => {
		const one = item({ scheduleOn: 1, scheduleReasons: 'unexplained', ...more });
		const { lines } = compose(wanted([{ ...one, facts: { ...one.facts, reasons } }]));
		return lines.find(({ label }) => label === 'Tonight')?.value;
	};
	expect(said({})).toContain('a rule will do it, 01:00 to 05:00');
	expect(said({}, ['strong_field'])).toContain('not for this cause');
	expect(said({ scheduleOn: 0 })).toContain('no rule will do it');
	expect(said({ refreshState: 'asked' })).toContain('waits for somebody to approve');
	expect(said({ refreshState: 'waiting' })).toBe('a film refresh is under way');
});

test('drift’s own cause is named; what came back says so', () => {
	const one = item();
	const { lines } = compose(wanted([{ ...one, facts: { cause: 'tilt', causeMg: 12 } }]));
	expect(lines.find(({ label }) => label === 'Cause')?.value).toBe(
		'consistent with a tilt of the node (12 mG)'
	);
	expect(compose(wanted([item({ times: 3 })])).news).toBe('It is back: this is time 3 of it.');
});

test('names are escaped in HTML, and nothing is loaded from outside', () => {
	const html = drawHtml(compose(wanted([item()])));
	expect(html).toContain('Tallow &lt;Yard&gt;');
	expect(html).not.toContain('<Yard>');
	expect(html.match(/src="([^"]*)"/g)).toEqual(['src="cid:m@lodekeep"', 'src="cid:p@lodekeep"']);
	expect(html).not.toMatch(/<(script|style|link)\b/);
});

test('a mail about many lists them by what is to be done, thirty at the most', () => {
	const many = Array.from({ length: 40 }, (_, i) => item({ id: i, bay: `B${i}` }));
	const letter = compose(wanted(many));
	expect(letter.subject).toBe('Tallow <Yard>: 40 notices, film refresh due at B0, B1, B2 …');
	expect(letter.groups[0]?.rows).toHaveLength(30);
	expect(letter.more).toBe('and 10 more: see the sheet');
	expect(letter.plot).toBeNull();
});

test('crc32 gives the check value of CRC-32/ISO-HDLC', () => {
	// Published check value of '123456789'.
	expect(crc32(Buffer.from('123456789'))).toBe(0xcbf43926);
});

test('the plot is a PNG of its size whose lines inflate to every pixel', () => {
	const points = Array.from({ length: 100 }, (_, i) => ({
		...{ atMs: NOW - (100 - i) * 3_600_000, valueMg: i / 6 }
	}));
	const png = driftPlot(points, [10, 16], NOW)!;
	expect(png.subarray(1, 4).toString('latin1')).toBe('PNG');
	expect([png.readUInt32BE(16), png.readUInt32BE(20)]).toEqual([PLOT.width, PLOT.height]);
	const at = png.indexOf('IDAT');
	const data = png.subarray(at + 4, at + 4 + png.readUInt32BE(at - 4));
	expect(inflateSync(data)).toHaveLength((PLOT.width + 1) * PLOT.height);
	expect(driftPlot(points.slice(0, 1), [10], NOW)).toBeNull();
});
