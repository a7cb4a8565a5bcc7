import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { AxeBuilder } from '@axe-core/playwright';
import type { Page } from 'playwright-core';
import { picture } from '../support/browser';
import { alive, Office } from './support/desk';

let office: Office;
beforeAll(async () => (office = await Office.open()));
afterAll(async () => await office.end());

const SITE = '/sites/tallow-yard';
const SHEETS = [
	'/sites',
	`${SITE}/plan`,
	`${SITE}/plan?bay=A-09`,
	`${SITE}/plan?as=table`,
	`${SITE}/bays/A-09`,
	`${SITE}/bays/A-09/record`,
	`${SITE}/nodes`,
	`${SITE}/closures`,
	`${SITE}/visits`,
	'/visits',
	`${SITE}/drift`,
	`${SITE}/parameters`,
	`${SITE}/how`,
	`${SITE}/refreshes`,
	`${SITE}/notices`,
	'/notices',
	'/mail-settings',
	'/connections',
	'/walls',
	'/people',
	'/mail',
	'/desk',
	'/password',
	'/sign-out',
	'/desk/primer'
];
const PUBLIC = ['/sign-in', '/reset', '/invitation?ticket=none', '/offline'];
const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'];

/** Sheets that stand for all in the night theme: tokens.test.ts holds every pair of inks of it. */
const AT_NIGHT = [
	`${SITE}/plan`,
	`${SITE}/bays/A-09`,
	`${SITE}/drift`,
	`${SITE}/notices`,
	'/sign-in'
];

/** All rules on paper; in the night theme only contrast can differ, as the document is the same. */
async function findings(page: Page, path: string): Promise<string[]> {
	await page.emulateMedia({ colorScheme: 'light' });
	await page.goto(path);
	await alive(page);
	await page.waitForTimeout(300);
	const paper = await new AxeBuilder({ page }).withTags(WCAG).analyze();
	return [...paper.violations, ...(await atNight(page, path))].map(
		(v) =>
			`${path}: ${v.id}: ${v.nodes
				.map((n) => n.target.join(' '))
				.join(' | ')
				.slice(0, 300)}`
	);
}

async function atNight(page: Page, path: string) {
	if (!AT_NIGHT.includes(path)) return [];
	await page.emulateMedia({ colorScheme: 'dark' });
	return (await new AxeBuilder({ page }).withRules(['color-contrast']).analyze()).violations;
}

describe('in both themes', () => {
	let admin: Page;
	let nobody: Page;
	beforeAll(async () => {
		admin = await office.signIn('admin');
		nobody = await (await office.context()).newPage();
	});
	afterAll(async () => {
		await Promise.all([admin, nobody].map(async (page) => await page.context().close()));
	});
	test.each(SHEETS)('axe finds nothing on %s', async (path) => {
		expect(await findings(admin, path)).toEqual([]);
	});
	test.each(PUBLIC)('axe finds nothing on %s, open to everybody', async (path) => {
		expect(await findings(nobody, path)).toEqual([]);
	});
});

test('a wall link shows the plan with lettering of 12 mm by the ruler, axe finds nothing, and it ends', async () => {
	const page = await office.signIn('operator', { width: 1920, height: 1080 });
	await page.goto('/walls');
	await alive(page);
	await page.getByRole('button', { name: 'Make a wall link' }).click();
	await page.getByLabel('Where it hangs').fill('gate house');
	await page.getByRole('button', { name: 'Make it' }).click();
	const href = (await page.locator('code').first().textContent()) ?? '';
	const wall = await (await office.context({ width: 1920, height: 1080 })).newPage();
	await wall.goto(href);
	await alive(wall);
	await wall.getByText(/(live|late since .*), \d+ of 24 nodes heard/).waitFor();
	await wall.getByRole('region', { name: 'Oldest doubts' }).getByText('A-09').waitFor();
	// Held against a ruler: a screen of 1.6 px a mm (about 1.2 m wide).
	await wall.evaluate(() => localStorage.setItem('lodekeep-wall-px-per-mm', '1.6'));
	await wall.reload();
	await alive(wall);
	const fontPx = await wall
		.getByRole('complementary')
		.evaluate((element) => parseFloat(getComputedStyle(element).fontSize));
	// Capitals of the typeface are 0.73 em.
	expect((fontPx * 0.73) / 1.6).toBeGreaterThanOrEqual(12);
	expect(await findings(wall, href)).toEqual([]);
	await picture(wall, 'wall');
	await page.getByRole('button', { name: 'Revoke gate house' }).click();
	await page.getByRole('button', { name: 'Revoke it' }).click();
	await wall.getByText('it was revoked').waitFor({ timeout: 10_000 });
	await Promise.all([page, wall].map(async (one) => await one.context().close()));
});

test('on a phone no sheet is wider than the screen, and targets of the bar are 44 px', async () => {
	const page = await office.signIn('admin', { width: 360, height: 740, phone: true });
	const wide: string[] = [];
	for (const path of SHEETS) {
		await page.goto(path);
		await alive(page);
		const over = await page.evaluate(
			() => document.documentElement.scrollWidth - window.innerWidth
		);
		if (over > 0) wide.push(`${path}: ${over} px`);
	}
	expect(wide).toEqual([]);
	await page.goto('/sites');
	const bar = page.getByRole('navigation', { name: 'Main' });
	for (const target of await bar.locator('a, button').all()) {
		const box = await target.boundingBox();
		expect(Math.min(box?.width ?? 0, box?.height ?? 0)).toBeGreaterThanOrEqual(44);
	}
	await page.context().close();
});

test.each(['en', 'de'])('at 320 px the sheets reflow, language %s', async (language) => {
	const page = await office.signIn('operator', { width: 320, height: 640 });
	await page
		.context()
		.addCookies([{ name: 'lodekeep-language', value: language, url: office.app.origin }]);
	const long = language === 'de' ? [`${SITE}/parameters`, `${SITE}/refreshes`] : [];
	for (const path of [`${SITE}/bays/A-09`, `${SITE}/plan`, '/sites', '/desk', ...long]) {
		await page.goto(path);
		await alive(page);
		expect(await page.locator('html').getAttribute('lang')).toBe(language);
		const over = await page.evaluate(
			() => document.documentElement.scrollWidth - window.innerWidth
		);
		expect(over, path).toBeLessThanOrEqual(0);
	}
	await page.context().close();
});

test('a tap on a small bay brings it to size, the second picks it', async () => {
	const page = await office.signIn('operator', { width: 360, height: 740, phone: true });
	await page.goto(`${SITE}/plan`);
	await alive(page);
	const plan = page.locator('.plan');
	const box = await plan.boundingBox();
	const centre = {
		x: (box?.x ?? 0) + (box?.width ?? 0) / 2,
		y: (box?.y ?? 0) + (box?.height ?? 0) / 2
	};
	// The lowest row (A) of the fitted plan, about its middle.
	const scale = async () => await page.locator('[aria-label="Title block"]').textContent();
	const before = await scale();
	await page.touchscreen.tap(centre.x, centre.y);
	await expect.poll(scale).not.toBe(before);
	expect(new URL(page.url()).searchParams.get('bay')).toBeNull();
	await page.touchscreen.tap(centre.x, centre.y);
	await expect.poll(() => new URL(page.url()).searchParams.get('bay')).toMatch(/^[ABC]-\d\d$/);
	await page.context().close();
});
