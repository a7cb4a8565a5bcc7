import { mkdirSync } from 'node:fs';
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';

/** Chromium as this kind of machine has it; no sandbox because tests run as root. */
export async function openBrowser(): Promise<Browser> {
	return await chromium.launch({
		executablePath: process.env['CHROMIUM'] ?? '/usr/bin/chromium',
		args: [
			'--no-sandbox',
			'--disable-gpu',
			'--disable-quic',
			'--no-first-run',
			'--disable-background-networking',
			'--disable-component-update',
			'--disable-sync'
		]
	});
}

export type ThemeName = 'paper' | 'blueprint';

export interface Desk {
	width: number;
	height: number;
	theme?: ThemeName;
	/** A phone: touch, coarse pointer. */
	phone?: boolean;
	/** Lets the service worker in: only the test of the offline shell wants it. */
	worker?: boolean;
	baseURL?: string;
}

/** A browser context of a given size and theme; a context is one person. */
export async function openDesk(browser: Browser, desk: Desk): Promise<BrowserContext> {
	return await browser.newContext({
		viewport: { width: desk.width, height: desk.height },
		colorScheme: desk.theme === 'blueprint' ? 'dark' : 'light',
		hasTouch: desk.phone ?? false,
		isMobile: desk.phone ?? false,
		serviceWorkers: desk.worker === true ? 'allow' : 'block',
		...(desk.baseURL === undefined ? {} : { baseURL: desk.baseURL })
	});
}

const OUT = 'tests/.out';

/** Keeps a picture for people to look at; never part of a check. */
export async function picture(page: Page, name: string): Promise<void> {
	mkdirSync(OUT, { recursive: true });
	await page.screenshot({ path: `${OUT}/${name}.png`, animations: 'disabled' });
}
