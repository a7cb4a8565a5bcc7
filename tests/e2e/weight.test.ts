import { gzipSync } from 'node:zlib';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { alive, Office } from './support/desk';

let office: Office;
beforeAll(async () => (office = await Office.open()));
afterAll(async () => await office.end());

const SCRIPT_LIMIT = 150_000;
const FONT_LIMIT = 60_000;

test('the first load of the plan is at most 150 kB of script gzip and 60 kB of fonts', async () => {
	const signed = await office.signIn('operator');
	const context = await office.context();
	await context.addCookies(await signed.context().cookies());
	const page = await context.newPage();
	const sizes = { script: 0, font: 0 };
	const seen: Promise<void>[] = [];
	page.on('response', (response) => {
		const kind = response.request().resourceType();
		if (kind !== 'script' && kind !== 'font') return;
		seen.push(
			response.body().then((body) => {
				sizes[kind] += kind === 'script' ? gzipSync(body, { level: 9 }).length : body.length;
			})
		);
	});
	await page.goto('/sites/tallow-yard/plan');
	await alive(page);
	await page.waitForTimeout(1_500);
	await Promise.all(seen);
	process.stdout.write(`${JSON.stringify({ bench: 'plan-weight', ...sizes })}\n`);
	expect(sizes.script).toBeLessThanOrEqual(SCRIPT_LIMIT);
	expect(sizes.script).toBeGreaterThan(10_000);
	expect(sizes.font).toBeLessThanOrEqual(FONT_LIMIT);
	expect(sizes.font).toBeGreaterThan(10_000);
	await Promise.all([signed, page].map(async (p) => await p.context().close()));
});
