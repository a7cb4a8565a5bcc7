import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Page } from 'playwright-core';
import { alive, Office } from './support/desk';

let office: Office;
beforeAll(async () => (office = await Office.open()));
afterAll(async () => await office.end());

const openBay = async (page: Page, code: string) => {
	await page.goto(`/sites/tallow-yard/plan?bay=${code}`);
	await alive(page);
	return page.getByRole('region', { name: new RegExp(`^${code}`) });
};
const settle = async (page: Page, way: string) => {
	await page.getByRole('button', { name: 'Settle' }).first().click();
	const dialog = page.getByRole('dialog');
	await dialog.getByLabel(way).check();
	await dialog.getByRole('button', { name: 'Settle' }).click();
	await dialog.waitFor({ state: 'detached' });
};

test('‘your system says taken, it is empty’: from the call to the answer in under 30 s', async () => {
	const page = await office.signIn('operator');
	const callMs = Date.now();
	await page.keyboard.press('/');
	await page.getByRole('combobox', { name: 'Bay code or serial' }).fill('A-09');
	await page.getByRole('listbox', { name: 'Found' }).getByRole('option').first().waitFor();
	await page.keyboard.press('Enter');
	await page.waitForURL('**/bays/A-09');
	await settle(page, 'I see it is free');
	await page.getByText('A-09 is settled.').waitFor();
	await page
		.locator('[data-part=head]')
		.getByText(/^Free since/)
		.waitFor({ timeout: 15_000 });
	await page.getByText(/Last seen by a person: .+, free\./).waitFor({ timeout: 20_000 });
	expect(Date.now() - callMs).toBeLessThan(30_000);
	await page.context().close();
});

test('a settling can be undone from the note that tells of it', async () => {
	const page = await office.signIn('operator');
	await openBay(page, 'A-02');
	await settle(page, 'I see it is taken');
	await page.getByRole('button', { name: 'Undo' }).click();
	await page.getByText('settling undone').waitFor();
	await page.context().close();
});

test('two people settle one bay at once: both are answered, one state stands, both see it', async () => {
	const [one, two] = await Promise.all([office.signIn('operator'), office.signIn('maintenance')]);
	const notes = await Promise.all([openBay(one, 'B-02'), openBay(two, 'B-02')]);
	await Promise.all([settle(one, 'I see it is taken'), settle(two, 'I see it is free')]);
	await Promise.all(
		[one, two].map(async (page) => await page.getByText('B-02 is settled.').waitFor())
	);
	const state = async (at: 0 | 1) =>
		(await notes[at].locator('p').first().textContent())?.trim().split(/\s/)[0];
	await expect
		.poll(async () => new Set([await state(0), await state(1)]).size, { timeout: 15_000 })
		.toBe(1);
	expect(['Taken', 'Free']).toContain(await state(0));
	await Promise.all([one, two].map(async (page) => await page.context().close()));
});

test('a bay is closed with a reason, drawn and listed so, and comes back when it is opened again', async () => {
	const page = await office.signIn('operator');
	await page.goto('/sites/tallow-yard/plan');
	await alive(page);
	await page.getByRole('button', { name: 'Close bays' }).click();
	const dialog = page.getByRole('dialog');
	await dialog.getByLabel('Bays', { exact: true }).fill('B-06');
	await dialog.getByLabel('Reason').fill('kerb works');
	await dialog.getByRole('button', { name: 'Close …' }).click();
	await dialog.getByText(/Close 1 bay \(B-06\) from .+: kerb works\?/).waitFor();
	await dialog.getByRole('button', { name: 'Close them' }).click();
	await dialog.waitFor({ state: 'detached' });
	const note = await openBay(page, 'B-06');
	await note.getByText('Closed').waitFor({ timeout: 10_000 });
	await note.getByText('kerb works').waitFor();
	await page.goto('/sites/tallow-yard/closures');
	await page.getByRole('button', { name: /Open again/ }).click();
	await page.getByText('B-06 is open again').waitFor();
	const again = await openBay(page, 'B-06');
	await again.getByText(/^(Free|Taken|Not known)/).waitFor({ timeout: 10_000 });
	await page.context().close();
});

test('somebody sent for is seen by the other, taken by one, and only once', async () => {
	const [operator, fitter] = await Promise.all([
		office.signIn('operator'),
		office.signIn('maintenance')
	]);
	const note = await openBay(operator, 'A-05');
	await note.getByRole('button', { name: 'Send someone' }).click();
	const dialog = operator.getByRole('dialog');
	await dialog.getByLabel('What is to be done there').fill('look whether the node is still there');
	await dialog.getByRole('button', { name: 'Send someone' }).click();
	await dialog.waitFor({ state: 'detached' });
	await fitter.goto('/sites/tallow-yard/visits');
	await alive(fitter);
	await fitter.getByLabel('Take A-05 along').check();
	await fitter.getByRole('button', { name: 'Take 1 bay into my walk' }).click();
	await fitter.getByRole('heading', { name: /^Walk \d+ at/ }).waitFor();
	await note.getByText(/Mads Tense \(MT\) has it/).waitFor({ timeout: 20_000 });
	const twice = await operator.request.post(
		`${office.app.origin}/api/desk/sites/tallow-yard/requests`,
		{ data: { bay: 'A-05', reason: 'again' }, headers: { origin: office.app.origin } }
	);
	expect(twice.status()).toBe(409);
	await Promise.all([operator, fitter].map(async (page) => await page.context().close()));
});

test('the node is asked at most every 10 min', async () => {
	const page = await office.signIn('maintenance');
	await openBay(page, 'A-11');
	await page.getByRole('button', { name: 'Ask the node' }).click();
	await page.getByText('SEED-A-11 was asked').waitFor();
	await page.getByRole('button', { name: 'Ask the node' }).click();
	await page.getByText(/SEED-A-11 was asked already; again in/).waitFor();
	await page.context().close();
});
