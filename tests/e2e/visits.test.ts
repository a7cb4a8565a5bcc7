import sharp from 'sharp';
import { AxeBuilder } from '@axe-core/playwright';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { SEED_PASSWORD } from '../support/seed';
import { alive, fillSignIn, Office } from './support/desk';

/* Issue 6, 'Visits': works on the phone without a connection and syncs later without loss or doubling; offline
   work belongs to whoever recorded it and waits through another person's sign-in. */
let office: Office;
let page: Page;
const LIST = '/sites/tallow-yard/visits';

beforeAll(async () => {
	office = await Office.open();
	page = await office.signIn('maintenance', { worker: true, phone: true, width: 360, height: 740 });
	await page.waitForURL((url) => url.pathname.startsWith('/sites'));
	await alive(page);
	await page.evaluate(async () => {
		await navigator.serviceWorker.ready;
	});
	for (const bay of ['A-05', 'A-01'])
		await page.request.post(`${office.app.origin}/api/desk/sites/tallow-yard/requests`, {
			...{ data: { bay, reason: 'look at it' }, headers: { origin: office.app.origin } }
		});
});
afterAll(async () => {
	await office.end();
});

const stored = async () => {
	const [rows] = await office.store.pool.query(
		`SELECT (SELECT COUNT(*) FROM visit_recording WHERE kind = 'tick') AS ticks,
			(SELECT COUNT(*) FROM visit_recording WHERE kind = 'outcome') AS outcomes,
			(SELECT COUNT(*) FROM visit_photo) AS photos,
			(SELECT COUNT(*) FROM visit_stop WHERE outcome IS NOT NULL) AS closed`
	);
	return (rows as Record<string, number>[])[0];
};
const stop = (bay: string) => page.getByRole('region', { name: new RegExp(`^Stop \\d+: ${bay}`) });

test('bays are taken into a walk that shows cautions, load and a plan, without a fault for axe', async () => {
	await page.goto(LIST);
	await alive(page);
	for (const bay of ['A-05', 'A-01']) await page.getByLabel(`Take ${bay} along`).check();
	await page.getByRole('button', { name: 'Take 2 bays into my walk' }).click();
	await page.getByRole('heading', { name: /^Walk \d+ at Tallow Yard/ }).waitFor();
	await page.getByText('Buried services are checked').waitFor();
	await page.getByRole('img', { name: /2 numbered stops/ }).waitFor();
	const { violations } = await new AxeBuilder({ page }).analyze();
	expect(violations.map(({ id }) => id)).toEqual([]);
	const wide = await page.evaluate(() => document.documentElement.scrollWidth);
	expect(wide).toBeLessThanOrEqual(360);
	// Kept for opening without a connection: with its keys, under this person.
	await expect
		.poll(
			async () =>
				await page.evaluate(async () => {
					const name = (await caches.keys()).find((one) => one.startsWith('lodekeep-kept-')) ?? '';
					const keys = await (await caches.open(name)).keys();
					return keys.map(({ url }) => new URL(url).pathname).sort();
				}),
			{ timeout: 10_000 }
		)
		.toEqual(expect.arrayContaining(['/kept/sealing', '/kept/walk']));
});

test('without a connection the walk opens and takes check, photo and outcome', async () => {
	await page.context().setOffline(true);
	await page.reload();
	await alive(page);
	await page.getByText('As this browser last had it').waitFor();
	await stop('A-05').getByLabel('Node found, bay code compared').check();
	const photo = await sharp({ create: { width: 80, height: 60, channels: 3, background: '#888' } })
		.jpeg()
		.toBuffer();
	await stop('A-05')
		.locator('input[type=file]')
		.setInputFiles({ name: 'a plate.jpg', mimeType: 'image/jpeg', buffer: photo });
	await stop('A-05').getByRole('img', { name: 'photo, waits to be sent' }).waitFor();
	await stop('A-05').getByLabel('Outcome').selectOption('cured');
	await stop('A-05').getByRole('button', { name: 'Close this stop' }).click();
	await page.getByRole('dialog').getByRole('button', { name: 'Close this stop' }).click();
	await page.getByText('3 recordings wait to be sent').waitFor();
	await stop('A-05').getByText('Closed here, waits to be sent: cured on the spot').waitFor();
	// What lies there says nothing to who looks at the browser's files.
	const clear = await page.evaluate(
		async () =>
			await new Promise<string>((done) => {
				const asked = indexedDB.open('lodekeep-waiting');
				asked.onsuccess = () => {
					const all = asked.result.transaction('recording').objectStore('recording').getAll();
					all.onsuccess = () => {
						done(JSON.stringify(all.result));
						asked.result.close();
					};
				};
			})
	);
	expect(clear).not.toMatch(/A-05|cured|node_found|tallow/);
});

test("it waits through sign-out and another person's sign-in, and is not sent under theirs", async () => {
	// The session is over by the time there is a connection again, and an admin uses the phone.
	await page.context().clearCookies();
	await page.context().setOffline(false);
	await page.goto('/sign-in');
	await fillSignIn(page, office.seeded.emails.admin, SEED_PASSWORD);
	await page.waitForURL((url) => url.pathname !== '/sign-in');
	await page.goto(LIST);
	await page.getByText('3 recordings of another person wait in this browser').waitFor();
	expect(await stored()).toEqual({ ticks: 0, outcomes: 0, photos: 0, closed: 0 });
	await page.goto('/sign-out');
	await page.getByRole('button', { name: 'Sign out' }).click();
	await page.getByText('You are signed out').waitFor();
});

test('back with its own person everything is sent once, and nothing twice', async () => {
	await page.goto('/sign-in');
	await fillSignIn(page, office.seeded.emails.maintenance, SEED_PASSWORD);
	await page.waitForURL((url) => url.pathname !== '/sign-in');
	await expect
		.poll(stored, { timeout: 20_000 })
		.toEqual({ ticks: 1, outcomes: 1, photos: 1, closed: 1 });
	await page.goto(LIST);
	await alive(page);
	await page.getByRole('link', { name: /^Open walk/ }).click();
	await stop('A-05').getByText('Closed: cured on the spot').waitFor();
	await stop('A-05')
		.getByRole('img', { name: /^Photo of/ })
		.waitFor();
	expect(await page.getByText('waits to be sent').count()).toBe(0);
	expect(await stored()).toEqual({ ticks: 1, outcomes: 1, photos: 1, closed: 1 });
});
