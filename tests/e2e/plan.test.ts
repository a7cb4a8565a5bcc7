import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Page } from 'playwright-core';
import { alive, Office, spoken, within } from './support/desk';

let office: Office;
let page: Page;
beforeAll(async () => {
	office = await Office.open();
	page = await office.signIn('operator');
	await page.waitForURL('**/sites/tallow-yard/plan');
	await alive(page);
});
afterAll(async () => await office.end());

const grid = () => page.getByRole('grid');

test('the plan is one tab stop that the keyboard walks: arrows, row ends, typed codes, needs', async () => {
	await grid().focus();
	await page.keyboard.type('a-01');
	const first = await spoken(page, 'A-01');
	expect(first).toMatch(/^A-01, Row A, row 1, 1 of 12, (taken|free) since/);
	const at = async () =>
		await page.locator('[role=gridcell][aria-selected=true]').getAttribute('data-bay');
	await page.keyboard.press('ArrowRight');
	expect(await at()).toBe('A-02');
	await page.keyboard.press('End');
	expect(await at()).toBe('A-12');
	await page.keyboard.press('Home');
	await page.keyboard.press('ArrowUp');
	expect(await at()).toBe('B-01');
	await page.keyboard.press('PageDown');
	expect(await at()).toBe('C-01');
	await page.keyboard.press('PageUp');
	await page.keyboard.press('PageUp');
	// The notes column lists the same bays in words.
	const listed = await page
		.getByRole('region', { name: 'Needs a person' })
		.getByRole('button')
		.allTextContents();
	expect(listed).toContain('A-09');
	const walked: (string | null)[] = [];
	for (const _ of listed) {
		await page.keyboard.press('.');
		walked.push(await at());
	}
	expect([...walked].sort()).toEqual([...listed].sort());
});

test('space picks: the note says state, why, doubt and that nobody has it; Escape puts it away', async () => {
	await page.waitForTimeout(1300);
	await grid().focus();
	await page.keyboard.type('a-09');
	await page.keyboard.press('Space');
	const note = page.getByRole('region', { name: /^A-09/ });
	await note.getByText('do not rely on this bay: slow crossing').waitFor();
	await note.getByText('the field stands 212 mG from the quiet field').waitFor();
	await note.getByText('needs a person, nobody has it').waitFor();
	await page.keyboard.press('Escape');
	await note.waitFor({ state: 'detached' });
});

test('Enter opens the dossier, whose head reads as sentences', async () => {
	await grid().focus();
	await page.keyboard.press('Enter');
	await page.waitForURL('**/bays/A-09');
	const head = (await page.locator('[data-part=head]').textContent())?.replace(/\s+/g, ' ') ?? '';
	expect(head).toMatch(/Taken since [\d:A-Za-z ]+ \(1 h \d+ min\), unsure\. Heard .+ ago\./);
	await page.goBack();
	await alive(page);
});

test('the table holds the same facts, filtered by zone and condition', async () => {
	await page.getByRole('button', { name: 'Table' }).click();
	const rows = page.getByRole('table').locator('tbody tr');
	await expect.poll(async () => await rows.count()).toBe(24);
	await page.getByLabel('Show').selectOption('doubtful');
	await expect.poll(async () => await rows.count()).toBe(1);
	expect(await rows.first().textContent()).toContain('slow crossing');
	await page.getByLabel('Show').selectOption('all');
	await page.getByRole('button', { name: 'Drawing' }).click();
	await grid().waitFor();
});

test('g and a letter opens a sheet, ? the list, / finds a bay by part of its serial', async () => {
	await page.locator('main').focus();
	await page.keyboard.press('g');
	await page.keyboard.press('n');
	await page.waitForURL('**/nodes');
	await page.locator('main').focus();
	await page.keyboard.press('?');
	await page.getByRole('dialog').getByText('this list').waitFor();
	await page.keyboard.press('Escape');
	await page.getByRole('dialog').waitFor({ state: 'detached' });
	await page.keyboard.press('/');
	await page.getByRole('combobox', { name: 'Bay code or serial' }).fill('SEED-B-0');
	await page.getByRole('listbox', { name: 'Found' }).getByRole('option').first().waitFor();
	await page.keyboard.press('ArrowDown');
	await page.keyboard.press('Enter');
	await page.waitForURL(/\/bays\/B-0\d$/);
	await page.goto('/sites/tallow-yard/plan');
	await alive(page);
});

test('a vehicle on the bay is on the plan within 5 s', async () => {
	const node = await office.node('SEED-A-02');
	const startMs = Date.now() - 30 * 60_000;
	/** Rows 10 s apart around a field, with noise of a few counts. */
	const message = (seq: number, fromMs: number, counts: readonly number[], rows: number) =>
		JSON.stringify({
			boot: 9,
			seq,
			t: fromMs,
			rows: Array.from({ length: rows }, (_, i) => [
				i * 10_000,
				...counts.map((count, axis) => count + ((i * 7 + axis * 3) % 5) - 2)
			]),
			polarity: 1,
			temp: 180,
			battery: 3600
		});
	// amr-18-16384: 16.384 counts/mG; the vehicle moves the field by about 190 mG.
	const quiet = [2950, -410, 7000];
	await node.publish(message(0, startMs, quiet, 90));
	await node.publish(message(1, startMs + 15 * 60_000, quiet, 85));
	await grid().focus();
	await page.keyboard.type('a-02');
	await expect.poll(async () => await spoken(page, 'A-02'), { timeout: 20_000 }).toContain('free');
	const publishedMs = Date.now();
	await node.publish(message(2, publishedMs - 20_000, [5000, 1200, 9000], 3));
	await expect
		.poll(async () => await spoken(page, 'A-02'), { timeout: 5_000, interval: 100 })
		.toContain('taken');
	expect(Date.now() - publishedMs).toBeLessThan(5_000);
});

test('without an answer the sheet says so within 15 s and heals by itself', async () => {
	await page.context().setOffline(true);
	await within(page, /no answer from Lodekeep since/, 15_000);
	await page.context().setOffline(false);
	await page
		.getByText(/no answer from Lodekeep since/)
		.waitFor({ state: 'detached', timeout: 10_000 });
});

test('a site that is not heard any more is late, then lost, and live again when a node is heard', async () => {
	await page.goto('/sites/tallow-yard/plan');
	// A site just made is not late yet: this one is of yesterday.
	const { pool } = office.store;
	await pool.query('UPDATE site SET created_at_ms = ?', [Date.now() - 86_400_000]);
	await pool.query('UPDATE node_fast SET heard_at_ms = ?', [Date.now() - 300_000]);
	await within(page, /late since/, 15_000);
	await pool.query('UPDATE node_fast SET heard_at_ms = ?', [Date.now() - 7_200_000]);
	await within(page, /lost since/, 15_000);
	await pool.query('UPDATE node_fast SET heard_at_ms = ?', [Date.now()]);
	await within(page, /live, \d+ of 24 nodes heard/, 15_000);
});
