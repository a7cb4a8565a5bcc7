import { readFile } from 'node:fs/promises';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Download, Page } from 'playwright-core';
import { alive, Office } from './support/desk';

let office: Office;
let page: Page;
beforeAll(async () => {
	office = await Office.open();
	page = await office.signIn('maintenance');
});
beforeEach(async () => await page.emulateMedia({ media: 'screen' }));
afterAll(async () => await office.end());

const SITE = '/sites/tallow-yard';
/** PDF counts points: 210 mm = 595, 297 mm = 842, 420 mm = 1191 (ISO 216, 72 points to 25.4 mm). */
const PAPERS = [
	{ format: 'A4', landscape: false, points: [595, 842] },
	{ format: 'A3', landscape: true, points: [842, 1191] }
] as const;

describe('in print', () => {
	test.each([`${SITE}/plan`, `${SITE}/plan?as=table`, `${SITE}/nodes`, `${SITE}/bays/A-09/record`])(
		'%s is ink on white with frame and title block, without controls, on A4 and A3',
		async (path) => {
			await page.goto(path);
			await alive(page);
			await page.waitForTimeout(500);
			await page.emulateMedia({ media: 'print' });
			// A bay's code that opens its note on screen stands in print as the word it is.
			const drawn = await page
				.locator('button:visible, select:visible, input:visible')
				.evaluateAll((all) =>
					all
						.filter((one) => {
							const style = getComputedStyle(one);
							return style.borderTopWidth !== '0px' || style.textDecorationLine !== 'none';
						})
						.map((one) => one.outerHTML.slice(0, 120))
				);
			expect(drawn).toEqual([]);
			expect(await page.locator('[aria-label="Title block"]').isVisible()).toBe(true);
			const paint = await page.evaluate(() => {
				const style = getComputedStyle(document.documentElement);
				return [style.getPropertyValue('--paper').trim(), style.getPropertyValue('--ink').trim()];
			});
			expect(paint.map((ink) => /^#([\da-f])\1*$/.exec(ink)?.[1])).toEqual(['f', '0']);
			for (const { format, landscape, points } of PAPERS) {
				const pdf = (await page.pdf({ format, landscape })).toString('latin1');
				const box = /\/MediaBox ?\[0 0 ([\d.]+) ([\d.]+)\]/.exec(pdf);
				// Lying or standing as the sheet asks for; sizes to a point.
				const sides = [Number(box?.[1]), Number(box?.[2])].sort((a, b) => a - b);
				for (const at of [0, 1])
					expect(Math.abs((sides[at] ?? 0) - (points[at] ?? 0))).toBeLessThan(2);
				const pages = pdf.match(/\/Type ?\/Page\b/g)?.length ?? 0;
				expect(pages).toBeGreaterThanOrEqual(1);
				// 24 bays: a plan is one drawing, a list no more than a few pages.
				expect(pages).toBeLessThanOrEqual(path.endsWith('/plan') ? 1 : 3);
			}
		}
	);
});

const textOf = async (download: Download) => await readFile(await download.path(), 'utf8');

test('a plot is read aloud by arrows, zoomed by key and wheel, goes back, and is saved as CSV and PNG', async () => {
	await page.goto(`${SITE}/bays/A-09`);
	await alive(page);
	const figure = page.locator('figure').filter({ hasText: 'Magnitude' });
	const plot = figure.getByRole('application');
	await plot.focus();
	// Until its readings are there a plot has nothing to read aloud.
	await expect
		.poll(async () => {
			await page.keyboard.press('End');
			return await figure.locator('[aria-live]').textContent();
		})
		.toMatch(/\|B\| /);
	await page.keyboard.press('+');
	// A quarter nearer: a day shows 19.2 h.
	const from = page.getByLabel('from', { exact: true });
	const shownH = async () => {
		const [a, b] = [
			await from.inputValue(),
			await page.getByLabel('to', { exact: true }).inputValue()
		];
		return (Date.parse(b) - Date.parse(a)) / 3_600_000;
	};
	await expect.poll(shownH).toBeCloseTo(19.2, 1);
	await page.keyboard.press('Escape');
	await expect.poll(shownH).toBeCloseTo(24, 1);
	const back = figure.getByRole('button', { name: 'The span before: Magnitude' });
	await expect.poll(async () => await back.count()).toBe(0);
	await plot.hover();
	await page.mouse.wheel(0, -120);
	await back.click();
	await expect.poll(async () => await back.count()).toBe(0);

	const [csv] = await Promise.all([
		page.waitForEvent('download'),
		figure.getByRole('button', { name: 'CSV: Magnitude' }).click()
	]);
	expect(csv.suggestedFilename()).toBe('magnitude.csv');
	const lines = (await textOf(csv)).split('\r\n');
	expect(lines[0]).toBe('time_utc,|B|');
	expect(lines[1]).toMatch(/^\d{4}-\d\d-\d\dT[\d:.]+Z,\d+(\.\d+)?$/);
	const [png] = await Promise.all([
		page.waitForEvent('download'),
		figure.getByRole('button', { name: 'PNG: Magnitude' }).click()
	]);
	const bytes = await readFile(await png.path());
	// PNG signature, PNG specification (third edition) 5.2.
	expect([...bytes.subarray(0, 8)]).toEqual([137, 80, 78, 71, 13, 10, 26, 10]);
});

test('the theme set by hand holds over a reload and against the system', async () => {
	await page.emulateMedia({ colorScheme: 'light' });
	await page.goto('/desk');
	await alive(page);
	await page.getByLabel('Sheet', { exact: true }).selectOption('blueprint');
	await page.reload();
	await alive(page);
	const paper = async () =>
		await page.evaluate(() => getComputedStyle(document.body).getPropertyValue('--paper').trim());
	expect((await paper()).toLowerCase()).toBe('#0e2a4a');
	await page.getByLabel('Sheet', { exact: true }).selectOption('system');
	expect((await paper()).toLowerCase()).toBe('#faf6ec');
});

test('neither a sticky head nor the bottom bar covers what has the focus', async () => {
	const phone = await office.signIn('operator', { width: 360, height: 740, phone: true });
	const covered: string[] = [];
	for (const [at, path] of [
		[phone, `${SITE}/nodes`],
		[phone, `${SITE}/closures`],
		[page, `${SITE}/nodes`]
	] as const) {
		await at.goto(path);
		await alive(at);
		for (let stop = 0; stop < 40; stop++) {
			await at.keyboard.press('Tab');
			const under = await at.evaluate(() => {
				const one = document.activeElement;
				if (one === null || one === document.body) return null;
				const box = one.getBoundingClientRect();
				// What is larger than the screen has no middle to look at.
				if (box.width === 0 || box.height === 0 || box.height > innerHeight / 2) return null;
				const [x, y] = [box.left + Math.min(box.width / 2, 40), box.top + box.height / 2];
				if (x < 0 || y < 0 || x > innerWidth || y > innerHeight)
					return `outside: ${one.textContent?.trim().slice(0, 40)}`;
				const top = document.elementFromPoint(x, y);
				const seen = top !== null && (one.contains(top) || top.contains(one));
				return seen ? null : `${one.textContent?.trim().slice(0, 40)} under ${top?.className}`;
			});
			if (under !== null) covered.push(`${path}: ${under}`);
		}
	}
	expect(covered).toEqual([]);
	await phone.context().close();
});

test('a password can be pasted', async () => {
	const desk = await office.context();
	await desk.grantPermissions(['clipboard-read', 'clipboard-write']);
	const door = await desk.newPage();
	await door.goto('/sign-in');
	await alive(door);
	await door.evaluate(async () => await navigator.clipboard.writeText('pasted pass words'));
	await door.getByLabel('Password', { exact: true }).focus();
	await door.keyboard.press('Control+v');
	expect(await door.getByLabel('Password', { exact: true }).inputValue()).toBe('pasted pass words');
	await desk.close();
});
