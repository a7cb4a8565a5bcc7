import { AxeBuilder } from '@axe-core/playwright';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { sheetsFor } from '$lib/components/sheet/sheets';
import { seedDrift } from '../support/seed-drift';
import { alive, Office, type Who } from '../e2e/support/desk';

/** axe over every sheet as every role in both themes and both languages; the short suite holds the admin's in English. */
let office: Office;
beforeAll(async () => {
	office = await Office.open();
	await seedDrift(office.store, office.seeded);
});
afterAll(async () => await office.end());

const SITE = 'tallow-yard';
const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'];
const ROLES: readonly Who[] = ['operator', 'maintenance', 'integrator', 'admin'];
/** Beside the index: a picked bay, the table, a dossier, its record, own desk and password. */
const BESIDE = [
	`/sites/${SITE}/plan?bay=A-09`,
	`/sites/${SITE}/plan?as=table`,
	`/sites/${SITE}/bays/A-09`,
	`/sites/${SITE}/bays/A-09/record`,
	'/desk',
	'/password'
];

async function speak(page: Page, language: string): Promise<void> {
	await page.goto('/desk');
	await alive(page);
	await page.locator('select[name=language]').selectOption(language);
	await page.locator('form[action="?/language"] button').click();
	await page.waitForFunction((l) => document.documentElement.lang === l, language);
}

async function findings(page: Page, path: string, scheme: 'light' | 'dark'): Promise<string[]> {
	await page.emulateMedia({ colorScheme: scheme });
	await page.goto(path);
	await alive(page);
	await page.waitForTimeout(400);
	const { violations } = await new AxeBuilder({ page }).withTags(WCAG).analyze();
	return violations.map(
		(v) => `${scheme} ${path}: ${v.id}: ${v.nodes.map((n) => n.target.join(' ')).join(' | ')}`
	);
}

describe.each(ROLES)('as %s', (role) => {
	test.each(['en', 'de'])(
		'axe finds nothing on any sheet in either theme, in %s',
		async (language) => {
			const page = await office.signIn(role);
			await speak(page, language);
			const paths = [...sheetsFor(role, SITE).map(({ path }) => path(SITE)), ...BESIDE];
			const found: string[] = [];
			for (const path of paths)
				for (const scheme of ['light', 'dark'] as const)
					found.push(...(await findings(page, path, scheme)));
			expect(found).toEqual([]);
			await page.context().close();
		},
		600_000
	);
});
