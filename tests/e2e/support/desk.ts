import { expect } from 'vitest';
import type { Browser, BrowserContext, Page } from 'playwright-core';
import { connect, type Store } from '$lib/server/store/connect';
import { mqttPassword } from '$lib/wire/frames';
import { startApp, type TestApp } from '../../support/app';
import { openBrowser, openDesk, type Desk } from '../../support/browser';
import { Bench, LINK_SECRET } from '../../support/broker';
import { startDatabase } from '../../support/database';
import { MqttNode } from '../../support/mqtt-node';
import { seed, SEED_PASSWORD, seedNodeKey, type Seeded } from '../../support/seed';

export type Who = keyof Seeded['emails'];

/** The real app on a seeded database with a real broker, and a browser; all ended by `end`. */
export class Office {
	private constructor(
		readonly app: TestApp,
		readonly store: Store,
		readonly seeded: Seeded,
		readonly browser: Browser,
		readonly brokerPort: number,
		private readonly bench: Bench
	) {}

	static async open(): Promise<Office> {
		const bench = new Bench();
		try {
			return await Office.#furnish(bench);
		} catch (error) {
			await bench.end();
			throw error;
		}
	}

	static async #furnish(bench: Bench): Promise<Office> {
		const database = bench.ending(await startDatabase(), async (d) => await d.close());
		const store = bench.ending(connect(database.url), async (s) => await s.close());
		const seeded = await seed(store.db);
		const broker = await bench.broker();
		const app = bench.ending(
			await startApp({
				databaseUrl: database.url,
				env: { MQTT_URL: '', MQTT_PORT: String(broker.port), LODEKEEP_LINK_SECRET: LINK_SECRET }
			}),
			async (a) => await a.stop()
		);
		const browser = bench.ending(await openBrowser(), async (b) => await b.close());
		return new Office(app, store, seeded, browser, broker.port, bench);
	}

	async end(): Promise<void> {
		await this.bench.end();
	}

	async context(desk: Partial<Desk> = {}): Promise<BrowserContext> {
		return await openDesk(this.browser, {
			width: 1440,
			height: 900,
			baseURL: this.app.origin,
			...desk
		});
	}

	/** A person at a desk of their own, on their first screen. */
	async signIn(who: Who, desk: Partial<Desk> = {}): Promise<Page> {
		const page = await (await this.context(desk)).newPage();
		await page.goto('/sign-in');
		await fillSignIn(page, this.seeded.emails[who], SEED_PASSWORD);
		await page.waitForURL((url) => url.pathname !== '/sign-in');
		return page;
	}

	/** A seeded node's own connection. */
	async node(serial: string): Promise<MqttNode> {
		const password = mqttPassword(seedNodeKey(serial));
		return this.bench.ending(
			await MqttNode.connect(this.brokerPort, { serial, password }),
			async (node) => await node.end()
		);
	}
}

export async function fillSignIn(page: Page, email: string, password: string): Promise<void> {
	await page.getByLabel('E-mail').fill(email);
	await page.getByLabel('Password', { exact: true }).fill(password);
	await page.getByRole('button', { name: 'Sign in' }).click();
}

/** The browser's script runs: what the server drew can be worked with. */
export async function alive(page: Page): Promise<void> {
	await page.waitForFunction(() => document.querySelector('[data-sveltekit-ready]') !== null);
}

/** What the grid behind the plan says of a bay that the keyboard is brought to. */
export async function spoken(page: Page, code: string): Promise<string> {
	const cell = page.locator(`[role=gridcell][data-bay="${code}"]`);
	await expect.poll(async () => await cell.count(), { timeout: 10_000 }).toBe(1);
	return (await cell.textContent()) ?? '';
}

/** Polls until the text is there; the answer is how long it took, in ms. */
export async function within(page: Page, text: string | RegExp, limitMs: number): Promise<number> {
	const startMs = Date.now();
	await page.getByText(text).first().waitFor({ state: 'attached', timeout: limitMs });
	return Date.now() - startMs;
}
