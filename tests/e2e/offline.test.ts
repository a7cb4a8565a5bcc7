import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Page } from 'playwright-core';
import { SEED_PASSWORD } from '../support/seed';
import { alive, fillSignIn, Office, spoken } from './support/desk';

let office: Office;
let page: Page;
const PLAN = '/sites/tallow-yard/plan';

beforeAll(async () => {
	office = await Office.open();
	page = await office.signIn('operator', { worker: true });
	await page.waitForURL(`**${PLAN}`);
	await alive(page);
	await page.evaluate(async () => {
		await navigator.serviceWorker.ready;
	});
});
afterAll(async () => await office.end());

/** Paths in the browser's cache storage, by cache. */
const cached = async () =>
	await page.evaluate(async () => {
		const found: Record<string, string[]> = {};
		for (const name of await caches.keys()) {
			const requests = await (await caches.open(name)).keys();
			found[name] = requests.map(({ url }) => new URL(url).pathname);
		}
		return found;
	});
const kept = async () =>
	Object.entries(await cached())
		.filter(([name]) => name.startsWith('lodekeep-kept-'))
		.flatMap(([, paths]) => paths)
		.sort();
const untilKept = async () =>
	await expect.poll(kept, { timeout: 10_000 }).toEqual(['/kept/contact', '/kept/plan']);

/** Makes the last contact older by that many hours. */
const age = async (hours: number) =>
	await page.evaluate(async (ms) => {
		const name = (await caches.keys()).find((one) => one.startsWith('lodekeep-kept-')) ?? '';
		await (await caches.open(name)).put('/kept/contact', Response.json(Date.now() - ms));
	}, hours * 3_600_000);

test('the worker keeps the shell and no answer of /auth or /api', async () => {
	await untilKept();
	const all = Object.values(await cached()).flat();
	expect(all).toContain('/offline');
	expect(all.filter((path) => /^\/(auth|api|sites|sign-in)/.test(path))).toEqual([]);
	expect(all.filter((path) => !/^\/(offline|_app|favicon|kept)/.test(path))).toEqual([]);
});

test('without a connection the last plan opens, marked old, and the sheet comes back by itself', async () => {
	await page.context().setOffline(true);
	await page.goto(PLAN);
	await alive(page);
	await page.getByRole('region', { name: 'Old' }).getByText('do not rely on it').waitFor();
	await page.getByRole('region', { name: 'Title block' }).getByText('no connection').waitFor();
	await page.getByRole('grid').focus();
	await page.keyboard.type('a-09');
	expect(await spoken(page, 'A-09')).toContain('slow crossing');
	await page.context().setOffline(false);
	await page.waitForURL(`**${PLAN}`, { timeout: 15_000 });
});

test('after 72 h without contact it is locked, and a clock set back does not open it', async () => {
	await untilKept();
	await age(73);
	await page.context().setOffline(true);
	await page.goto(PLAN);
	await page.getByText('What this browser kept is locked.').waitFor();
	expect(await page.getByRole('grid').count()).toBe(0);
	await age(1);
	await page.goto(PLAN);
	await page.getByText('This browser keeps no plan.').waitFor();
	await page.context().setOffline(false);
});

test('a change of role takes out what the former role kept', async () => {
	await page.goto(PLAN);
	await untilKept();
	const { pool } = office.store;
	await pool.query("UPDATE person SET role = 'maintenance' WHERE id = ?", [
		office.seeded.people.operator
	]);
	// The directory of people is read again within half a second.
	await page.waitForTimeout(600);
	await page.goto('/sites');
	await alive(page);
	await expect.poll(kept).toEqual(['/kept/contact']);
});

test('what is kept goes with the session: at sign-out and on a 401', async () => {
	await page.goto(PLAN);
	await untilKept();
	await page.goto('/sign-out');
	await page.getByRole('button', { name: 'Sign out' }).click();
	await page.getByText('You are signed out').waitFor();
	await expect.poll(kept).toEqual([]);
	await page.goto('/sign-in');
	await fillSignIn(page, office.seeded.emails.operator, SEED_PASSWORD);
	await page.waitForURL((url) => url.pathname !== '/sign-in');
	await page.goto(PLAN);
	await untilKept();
	await page.context().clearCookies();
	await page.getByRole('heading', { name: 'You are signed out' }).waitFor({ timeout: 10_000 });
	await expect.poll(kept).toEqual([]);
});
