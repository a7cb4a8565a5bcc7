import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Browser } from 'playwright-core';
import { createSecret } from '$lib/server/secret';
import { connect, type Store } from '$lib/server/store/connect';
import { setHabit } from '../../simulator/node';
import { startApp, TEST_SECRET, type TestApp } from '../support/app';
import { Bench, LINK_SECRET } from '../support/broker';
import { openBrowser, openDesk, picture } from '../support/browser';
import { startDatabase } from '../support/database';
import { act, eventually, makeSite, type TestNode, type TestSite } from '../support/ingest';
import { openMailBox, type MailBox } from '../support/mail';
import { MqttNode } from '../support/mqtt-node';
import { seed, SEED_PASSWORD, type Seeded } from '../support/seed';
import { Street } from '../support/street';
import { alive, fillSignIn } from './support/desk';

const MIN = 60_000;
const HOUR = 60 * MIN;
const bench = new Bench();
const startMs = Date.now() - 4 * HOUR;
let store: Store;
let seeded: Seeded;
let site: TestSite;
let app: TestApp;
let box: MailBox;
let browser: Browser;
let street: Street;

const rows = async <T>(text: string, values: unknown[] = []): Promise<T[]> =>
	(await store.pool.query(text, values))[0] as T[];

beforeAll(async () => {
	const database = bench.ending(await startDatabase(), async (d) => await d.close());
	store = bench.ending(connect(database.url), async (s) => await s.close());
	seeded = await seed(store.db);
	site = await makeSite(store, createSecret(TEST_SECRET), { nodes: 1 });
	const { operator, maintenance } = seeded.people;
	await rows('INSERT INTO person_site (person_id, site_id) VALUES ?', [
		[operator, maintenance].map((id) => [id, site.siteId])
	]);
	// At whatever hour the test runs, mail goes at once.
	await rows(
		`INSERT INTO mail_setting (person_id, paces, sites, quiet_from_min, quiet_to_min, quiet_weekends, daily_at_min)
		 VALUES (?, '{}', ?, 0, 0, 0, 420)`,
		[maintenance, String(site.siteId)]
	);
	box = bench.ending(await openMailBox(), async (b) => await b.close());
	const broker = await bench.broker();
	app = bench.ending(
		await startApp({
			databaseUrl: database.url,
			env: {
				...{ MQTT_URL: '', MQTT_PORT: String(broker.port), LODEKEEP_LINK_SECRET: LINK_SECRET },
				...{ SMTP_URL: box.url, MAIL_FROM: 'Lodekeep <keep@lodekeep.example>' }
			}
		}),
		async (a) => await a.stop()
	);
	browser = bench.ending(await openBrowser(), async (b) => await b.close());
	const node = site.nodes[0]!;
	const client = bench.ending(
		await MqttNode.connect(broker.port, node.key),
		async (c) => await c.end()
	);
	await client.listen();
	street = await learned(node, client);
}, 120_000);
afterAll(async () => await bench.end());

/** The node has learned its quiet field; then its film loses 8 %. It reports up to now. */
async function learned(node: TestNode, client: MqttNode): Promise<Street> {
	const lossMs = startMs + HOUR;
	const remaining: [number, number, number] = [0.92, 0.92, 0.92];
	const film = { kind: 'loss', atMs: lossMs, toMs: lossMs + 10 * MIN, remaining } as const;
	const line = {
		client: async () => await Promise.resolve(client),
		// The app's own sender does.
		sendCommands: async () => await Promise.resolve(),
		waitMs: 15_000
	};
	const one = new Street(node, [film], startMs, line);
	await one.boot();
	await act(store, site.siteId, node, 'place', { preCommissioned: true }, startMs + 1_000);
	await eventually(
		async () => await rows('SELECT id FROM act WHERE taken_at_ms IS NULL'),
		(left) => left.length === 0,
		15_000
	);
	await one.until(startMs + 8 * MIN);
	setHabit(one.state, { periodS: 60, deltaMg: 8 }, one.atMs);
	await one.until(Date.now() - 2_000);
	return one;
}

/** What the drift job would have written and shown by now: three days of growing, and a film refresh due. */
async function driftGrows(node: TestNode): Promise<void> {
	const nowMs = Math.floor(Date.now() / HOUR) * HOUR;
	const hours = Array.from({ length: 72 }, (_, i) => [
		...[node.id, nowMs - (72 - i) * HOUR, 40, 0, 0, 0, 0, 0, 0, (i / 4) * 1000, 0, 0]
	]);
	await rows(
		`INSERT INTO drift_hour (node_id, hour_ms, n, field_x_ug, field_y_ug, field_z_ug, offset_x_ug, offset_y_ug,
			offset_z_ug, unexplained_x_ug, unexplained_y_ug, unexplained_z_ug) VALUES ?
		 ON DUPLICATE KEY UPDATE unexplained_x_ug = VALUES(unexplained_x_ug)`,
		[hours]
	);
	await rows("UPDATE bay_state SET `condition` = 'refresh_due' WHERE bay_id = ?", [node.bayId]);
	await rows('UPDATE site SET last_change = last_change + 1 WHERE id = ?', [site.siteId]);
	await rows(
		"INSERT INTO `change` (site_id, id, kind, bay_id, recorded_at_ms) SELECT id, last_change, 'condition', ?, ? FROM site WHERE id = ?",
		[node.bayId, Date.now(), site.siteId]
	);
}

test('drift grows, a mail comes, its link is opened, the film refresh is approved, the node obeys, and it is proved', async () => {
	const node = site.nodes[0]!;
	const operator = await app.signIn(seeded.emails.operator);
	const asked = await operator(`/api/v1/nodes/${node.serial}/refresh`, {
		method: 'POST',
		body: { reason: 'drifts since the crane' }
	});
	expect(asked.status).toBe(201);
	await driftGrows(node);
	const mail = await box.next('maintenance@', 'A-1, Osier Yard: film refresh due', 20_000);
	expect(mail.text?.replaceAll(/\s+/g, ' ')).toContain('it waits for somebody to approve it');
	expect(mail.attachments.map(({ contentType }) => contentType)).toEqual([
		'image/png',
		'image/png'
	]);
	const link = /http:\/\/\S+\/sites\/osier-yard\/refreshes/.exec(mail.text ?? '')?.[0] ?? '';
	expect(link).not.toBe('');

	const desk = await openDesk(browser, { width: 1440, height: 900, baseURL: app.origin });
	const page = await desk.newPage();
	await page.goto(link);
	await fillSignIn(page, seeded.emails.maintenance, SEED_PASSWORD);
	await page.waitForURL((url) => url.pathname === '/sites/osier-yard/refreshes');
	await alive(page);
	await page.getByRole('link', { name: 'A-1', exact: true }).click();
	await street.ignore();
	await page.getByRole('button', { name: 'Approve', exact: true }).click();
	await page.getByLabel('Also outside quiet hours').check();
	await page.getByRole('dialog').getByRole('button', { name: 'Approve' }).click();
	await page.getByText('A-1: approved.').waitFor();

	// The command comes over MQTT, signed; the node of true physics fires its pair and answers.
	await street.until(Date.now());
	await street.obey();
	await page
		.getByText(/of 60 still readings/)
		.first()
		.waitFor({ timeout: 40_000 });
	await street.obey();
	// Its clock may run ahead of the server's by the minute that the protocol allows.
	setHabit(street.state, { periodS: 0.5, deltaMg: 8 }, street.atMs);
	await street.until(street.atMs + 50_000);
	await page.getByText(/^Proved: the film had lost/).waitFor({ timeout: 30_000 });
	await page.getByRole('table', { name: 'Before and after the pulse' }).waitFor();
	await picture(page, 'story-proof');
	const [proof] = await rows<{ percent: number }>(
		"SELECT JSON_VALUE(proof, '$.filmLossPercent') AS percent FROM refresh WHERE state = 'proved' AND node_id = ?",
		[node.id]
	);
	// The film of this street was left with 92 %.
	expect(Number(proof?.percent)).toBeGreaterThan(7);
	expect(Number(proof?.percent)).toBeLessThan(9);
}, 120_000);
