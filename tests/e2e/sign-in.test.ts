import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { SEED_PASSWORD } from '../support/seed';
import { alive, fillSignIn, Office } from './support/desk';

let office: Office;
beforeAll(async () => (office = await Office.open()));
afterAll(async () => await office.end());

/** First screens of product.md, 'The people', as far as their sheets are built; sheets their index offers. */
const EVERYDAY = ['Sites', 'Plan', 'Nodes', 'Closures', 'Visits', 'Drift', 'Film refreshes'];
const LATER = ['Parameters', 'How decided', 'Notices', 'Wall links', 'All notices'];
const ROLES = [
	['operator', '/sites/tallow-yard/plan', [...EVERYDAY, ...LATER]],
	['maintenance', '/sites/tallow-yard/drift', [...EVERYDAY, ...LATER]],
	[
		'integrator',
		'/connections',
		['Sites', 'Plan', 'Nodes', 'Drift', 'Connections', 'Parameters', 'How decided']
	],
	['admin', '/sites', [...EVERYDAY, 'Connections', 'People', 'Mail', ...LATER]]
] as const;

describe.each(ROLES)('%s', (role, first, sheets) => {
	test(`signs in and lands on ${first}, with the sheets of the role and no other`, async () => {
		const page = await office.signIn(role);
		await page.waitForURL((url) => url.pathname === first);
		const index = page.getByRole('navigation', { name: 'Sheets' });
		const names = await index.getByRole('link').allTextContents();
		// The index has two rows, of all sites and of this one: which sheets it names is what counts.
		const named = names.map((name) => name.replace(/^\s*\d+\s*/, '').trim());
		expect(named.sort()).toEqual([...sheets].sort());
		await page.context().close();
	});
});

test('a sheet that the role does not have is refused, and a site out of reach is not there', async () => {
	const page = await office.signIn('operator');
	for (const [path, status] of [
		['/people', 403],
		['/mail', 403],
		['/connections', 403],
		['/sites/far-shed/plan', 404]
	] as const) {
		expect((await page.goto(path))?.status(), path).toBe(status);
	}
	await page.context().close();
});

test('a wrong password is said so, and says nothing of whether the person exists', async () => {
	const page = await (await office.context()).newPage();
	await page.goto('/sign-in');
	await fillSignIn(page, office.seeded.emails.operator, 'not the password');
	const known = await page.getByText('do not belong together').textContent();
	await fillSignIn(page, 'nobody@lodekeep.example', 'not the password');
	await expect
		.poll(async () => await page.getByText('do not belong together').textContent())
		.toBe(known);
	await page.context().close();
});

test('signing out ends the session for every page of it', async () => {
	const page = await office.signIn('operator');
	await page.goto('/sign-out');
	await page.getByRole('button', { name: 'Sign out' }).click();
	await page.getByText('You are signed out').waitFor();
	await page.goto('/sites');
	expect(new URL(page.url()).pathname).toBe('/sign-in');
	await page.context().close();
});

test('a session that ends on an open sheet is said so, and signing in again loses nothing typed', async () => {
	const page = await office.signIn('operator');
	await page.goto('/sites/tallow-yard/plan?as=table');
	await alive(page);
	await page.getByLabel('Filter').fill('A-0');
	await page.context().clearCookies();
	await page.getByRole('heading', { name: 'You are signed out' }).waitFor({ timeout: 10_000 });
	await page.getByText('signed out: what is shown stands still').waitFor();
	const dialog = page.getByRole('dialog');
	await dialog.getByLabel('E-mail').fill(office.seeded.emails.operator);
	await dialog.getByLabel('Password').fill(SEED_PASSWORD);
	await dialog.getByRole('button', { name: 'Sign in' }).click();
	await dialog.waitFor({ state: 'detached' });
	await page.getByText('signed out: what is shown stands still').waitFor({ state: 'detached' });
	expect(await page.getByLabel('Filter').inputValue()).toBe('A-0');
	await page.context().close();
});

test('a person who chooses German reads the sheets in German from then on, dates by Intl', async () => {
	const page = await office.signIn('operator');
	await page.goto('/desk');
	await alive(page);
	await page.getByLabel('Language').selectOption('de');
	await page.getByRole('button', { name: 'Use this language' }).click();
	await page.waitForFunction(() => document.documentElement.lang === 'de');
	await page.goto('/sites/tallow-yard/plan');
	await alive(page);
	await page.getByRole('heading', { name: 'Braucht jemanden' }).waitFor();
	await page.getByText('aktuell, 24 von 24 Knoten gehört').waitFor();
	await page.context().clearCookies({ name: 'lodekeep-session' });
	await page.goto('/sign-in');
	await page.getByRole('button', { name: 'Anmelden' }).waitFor();
	await office.store.pool.query("UPDATE person SET language = 'en'");
	await page.context().close();
});
