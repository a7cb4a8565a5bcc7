import { mkdirSync } from 'node:fs';
import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { newTicket } from '$lib/server/auth/ticket';
import { connect } from '$lib/server/store/connect';
import * as wallLinks from '$lib/server/store/queries/wall-links';
import { startApp } from '../support/app';
import { openBrowser, openDesk, type ThemeName } from '../support/browser';
import { startDatabase } from '../support/database';
import { seed, SEED_PASSWORD } from '../support/seed';
import { makeWideSite, WIDE } from './web-site';

/**
 * Pictures of the main sheets, and their prints on A4 and A3, into tests/.out; then each picture against
 * the one kept in tests/bench/reference: `npx tsx tests/bench/web-look.ts`, with `--keep` to take the new
 * ones as reference after looking at them, `--every` for more sheets and sizes, `--prints` for prints alone. Times of day differ between runs: up to 4 % of the pixels may.
 */
const OUT = 'tests/.out';
const REFERENCE = join(import.meta.dirname, 'reference');
const TOLERANCE = 0.04;
const keep = process.argv.includes('--keep');
const every = process.argv.includes('--every');
const prints = process.argv.includes('--prints');
mkdirSync(OUT, { recursive: true });
mkdirSync(REFERENCE, { recursive: true });

interface Shot {
	name: string;
	path: string;
	width: number;
	height: number;
	theme: ThemeName;
	phone?: boolean;
}
const SITE = '/sites/tallow-yard';
const shot = (name: string, path: string, width: number, theme: ThemeName = 'paper'): Shot => ({
	...{ name, path, width, theme, phone: width < 500 },
	height: width < 500 ? 740 : Math.round(width * 0.62)
});
/** Kept as reference. */
const SHOTS: Shot[] = [
	shot('plan-1440', `${SITE}/plan?bay=A-09`, 1440),
	shot('plan-1440-night', `${SITE}/plan`, 1440, 'blueprint'),
	shot('plan-360', `${SITE}/plan`, 360),
	shot('plan-wide-1440', `/sites/${WIDE.slug}/plan`, 1440),
	shot('table-1440', `${SITE}/plan?as=table`, 1440),
	shot('sites-1440', '/sites', 1440),
	shot('desk-360', '/desk', 360)
];
/** Only to be looked at. */
const MORE: Shot[] = [
	...[768, 2560].map((width) => shot(`plan-${width}`, `${SITE}/plan`, width)),
	shot('plan-wide-360', `/sites/${WIDE.slug}/plan`, 360, 'blueprint'),
	shot('plan-undrawn', '/sites/far-shed/plan', 1440),
	shot('bay-1440', `${SITE}/bays/A-09`, 1440),
	shot('bay-360', `${SITE}/bays/A-09`, 360, 'blueprint'),
	shot('nodes-768', `${SITE}/nodes`, 768),
	shot('walls-1440', '/walls', 1440, 'blueprint'),
	shot('missing', '/sites/nowhere/plan', 768)
];
const PRINTS = [
	['plan', `${SITE}/plan`],
	['table', `${SITE}/plan?as=table`],
	['record', `${SITE}/bays/A-09/record`],
	['nodes', `${SITE}/nodes`]
] as const;

/** Share of pixels that differ by more than a shade, told by the browser itself. */
async function difference(browser: Browser, a: Buffer, b: Buffer): Promise<number> {
	const page = await browser.newPage();
	// tsx names functions through this helper, which a page does not have.
	await page.evaluate('globalThis.__name = (named) => named');
	const share = await page.evaluate(
		async ([one, other]) => {
			const pixels = async (data: string) => {
				const image = new Image();
				image.src = `data:image/png;base64,${data}`;
				await image.decode();
				const canvas = new OffscreenCanvas(image.width, image.height);
				const context = canvas.getContext('2d');
				context?.drawImage(image, 0, 0);
				return (
					context?.getImageData(0, 0, image.width, image.height).data ?? new Uint8ClampedArray()
				);
			};
			const [p, q] = [await pixels(one), await pixels(other)];
			if (p.length !== q.length) return 1;
			let differing = 0;
			for (let at = 0; at < p.length; at += 4)
				if (Math.abs((p[at] ?? 0) - (q[at] ?? 0)) > 48) differing += 1;
			return differing / (p.length / 4);
		},
		[a.toString('base64'), b.toString('base64')] as const
	);
	await page.close();
	return share;
}

async function take(browser: Browser, origin: string, cookies: Cookies, one: Shot) {
	const context = await openDesk(browser, { ...one, baseURL: origin });
	await context.addCookies(cookies);
	const page = await context.newPage();
	await page.goto(one.path);
	await settled(page);
	const png = await page.screenshot({ animations: 'disabled' });
	await writeFile(join(OUT, `look-${one.name}.png`), png);
	await context.close();
	return png;
}
type Cookies = Awaited<ReturnType<Awaited<ReturnType<typeof openDesk>>['cookies']>>;

async function settled(page: Page): Promise<void> {
	await page
		.waitForFunction(() => document.querySelector('[data-sveltekit-ready]') !== null, undefined, {
			timeout: 10_000
		})
		.catch(() => undefined);
	await page.waitForTimeout(1_500);
}

const ends: (() => Promise<unknown>)[] = [];
let failed = false;
try {
	const database = await startDatabase();
	ends.unshift(async () => await database.close());
	const store = connect(database.url);
	ends.unshift(async () => await store.close());
	const seeded = await seed(store.db);
	await makeWideSite(store);
	const app = await startApp({ databaseUrl: database.url });
	ends.unshift(async () => await app.stop());
	const browser = await openBrowser();
	ends.unshift(async () => await browser.close());
	const context = await openDesk(browser, { width: 1440, height: 900, baseURL: app.origin });
	const page = await context.newPage();
	await page.goto('/sign-in');
	await page.getByLabel('E-mail').fill(seeded.emails.admin);
	await page.getByLabel('Password', { exact: true }).fill(SEED_PASSWORD);
	await page.getByRole('button', { name: 'Sign in' }).click();
	await page.waitForURL('**/sites');
	const cookies = await context.cookies();
	const wall = newTicket();
	await wallLinks.create(
		store.db,
		{
			...{ tokenHash: wall.hash, name: 'gate house', turnS: 0, makerId: null, expiresAtMs: null },
			siteIds: [seeded.sites.yard]
		},
		Date.now()
	);
	const kept = prints ? [] : [...SHOTS, shot('wall-1920', `/wall/${wall.text}`, 1920)];
	for (const one of kept) {
		const png = await take(browser, app.origin, cookies, one);
		const file = join(REFERENCE, `${one.name}.png`);
		const before = keep ? null : await readFile(file).catch(() => null);
		if (before === null) await writeFile(file, png);
		const share = before === null ? null : await difference(browser, before, png);
		failed ||= (share ?? 0) > TOLERANCE;
		const told = share === null ? 'kept' : Math.round(share * 1e4) / 1e4;
		process.stdout.write(`${JSON.stringify({ bench: 'look', sheet: one.name, differs: told })}\n`);
	}
	if (every) for (const one of MORE) await take(browser, app.origin, cookies, one);
	if (every || prints)
		for (const [name, path] of PRINTS) {
			await page.goto(path);
			await settled(page);
			for (const format of ['A4', 'A3'] as const)
				await page.pdf({
					...{ path: join(OUT, `print-${name}-${format}.pdf`), format, landscape: true },
					...{ preferCSSPageSize: false, printBackground: true }
				});
		}
} finally {
	for (const end of ends) await end();
}
process.exitCode = failed ? 1 : 0;
