import { AxeBuilder } from '@axe-core/playwright';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Proof } from '$lib/server/refreshes/proof';
import * as refreshes from '$lib/server/store/queries/refreshes';
import { picture } from '../support/browser';
import { alive, Office } from './support/desk';

let office: Office;
const SHEET = '/sites/tallow-yard/refreshes';

beforeAll(async () => {
	office = await Office.open();
});
afterAll(async () => {
	await office.end();
});

const clean = async (page: Page) => {
	const { violations } = await new AxeBuilder({ page }).analyze();
	expect(violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html ?? ''}`)).toEqual([]);
};

test('an operator asks from the dossier, maintenance approves, sees what holds it, calls it off', async () => {
	const asker = await office.signIn('operator');
	await asker.goto('/sites/tallow-yard/bays/A-04');
	await alive(asker);
	await asker.getByRole('button', { name: 'Ask for a film refresh' }).click();
	await asker.getByRole('dialog').getByLabel('Why').fill('reads low since the works');
	await asker.getByRole('button', { name: 'Ask for it' }).click();
	await asker.getByText('film refresh asked for').waitFor();
	await asker.context().close();

	const page = await office.signIn('maintenance');
	await page.goto(SHEET);
	await alive(page);
	await page.getByRole('link', { name: 'A-04', exact: true }).click();
	await page.getByRole('heading', { name: /A-04/ }).waitFor();
	await page.getByRole('button', { name: 'Approve', exact: true }).click();
	await page.getByRole('dialog').getByRole('button', { name: 'Approve' }).click();
	await page.getByText('A-04: approved.').waitFor();
	await page
		.getByText(/^Waits for/)
		.first()
		.waitFor({ timeout: 15_000 });
	await picture(page, 'refreshes-open');
	await clean(page);
	await page.getByRole('button', { name: 'Call off', exact: true }).click();
	await page.getByRole('dialog').getByRole('button', { name: 'Call off' }).click();
	await page.getByText('A-04: called off.').waitFor();
	await page.context().close();
});

test('a proof stands side by side, on a desk and on a phone of 360 px; a bulk order shows its price first', async () => {
	const { pool } = office.store;
	const { seeded } = office;
	const proof: Proof = {
		filmLossMg: [-14, 1.8, -35],
		filmLossTotalMg: 37.7,
		filmLossPercent: 7.9,
		fieldBeforeMg: [166, -23, 405],
		fieldAfterMg: [180, -25, 440],
		offsetBeforeMg: [10, 2, -4],
		offsetAfterMg: [10.4, 2.1, -4.2],
		noiseBeforeMg: 0.6,
		noiseAfterMg: 0.6,
		unexplainedBeforeMg: 36.1,
		unexplainedAfterMg: 0.8,
		driftingMg: 10,
		gainRatio: 1.001,
		readings: 64,
		tempC: 11.5,
		checks: [{ name: 'readings', ok: true, says: '64 still readings of at least 60' }]
	};
	const atMs = seeded.nowMs - 600_000;
	const id = await refreshes.insert(pool, {
		siteId: seeded.sites.yard,
		nodeId: seeded.nodes['SEED-A-02']!,
		bayId: seeded.bays['A-02']!,
		bulkId: null,
		...{ origin: 'person', state: 'measured', open: true, reason: 'drift', evidence: '{}' },
		...{ askedBy: 'rule', askedAtMs: atMs, commandId: null }
	});
	await refreshes.save(pool, id, {
		...(await refreshes.lock(pool, id))!,
		...{ state: 'proved', pulseAtMs: atMs, proof: JSON.stringify(proof), endedAtMs: atMs },
		verdict: 'proved: the film had lost 37.7 mG (7.9 %)'
	});
	const page = await office.signIn('maintenance');
	await page.goto(`${SHEET}?id=${id}`);
	await alive(page);
	await page.getByText('37.7 mG, 7.9 %').waitFor();
	await page.getByText('Field x around the pulse').waitFor();
	await picture(page, 'refreshes-proof');
	await clean(page);
	await page.setViewportSize({ width: 360, height: 740 });
	const wider = await page.evaluate(() => document.documentElement.scrollWidth - innerWidth);
	expect(wider).toBeLessThanOrEqual(0);
	await picture(page, 'refreshes-phone');
	await page.setViewportSize({ width: 1440, height: 900 });
	await page.getByRole('tab', { name: 'Rules' }).click();
	await page.getByLabel('Commands under way at once').fill('2');
	await page.getByRole('button', { name: 'Keep these rules' }).click();
	await page.getByText('Rules on film refreshes kept.').waitFor();
	await picture(page, 'refreshes-rules');
	await page.getByRole('tab', { name: 'Bulk orders' }).click();
	await page.getByRole('button', { name: 'Bulk order', exact: true }).click();
	const dialog = page.getByRole('dialog');
	await dialog.getByLabel('Zone').fill('A');
	await dialog.getByLabel('Why').fill('after the magnet crane');
	await dialog.getByRole('button', { name: 'Preview' }).click();
	await dialog.getByText(/nodes qualify/).waitFor();
	await dialog.getByText(/^Price:/).waitFor();
	await picture(page, 'refreshes-bulk');
	await dialog.getByRole('button', { name: /^Ask for \d+ film refreshes/ }).click();
	await page.getByText('zone A').first().waitFor();
	await page.context().close();
});
