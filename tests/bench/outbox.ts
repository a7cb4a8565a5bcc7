import { SMTPServer } from 'smtp-server';
import type { AddressInfo } from 'node:net';
import { createLog } from '$lib/server/log';
import { composeDue } from '$lib/server/notices/compose-mail';
import { apply } from '$lib/server/notices/apply';
import { recipientOf } from '$lib/server/notices/people';
import type { Step } from '$lib/server/notices/reconcile';
import { openDelivery, type Delivery } from '$lib/server/outbox/transport';
import { startSender } from '$lib/server/outbox/sender';
import { createSecret } from '$lib/server/secret';
import { connect, type Store } from '$lib/server/store/connect';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import { transaction } from '$lib/server/store/transaction';
import { startDatabase } from '../support/database';

/**
 * `npm run bench:outbox`: 10,000 notices (1,000 sites of 10) told to 10 people each as 10,000 mails, over
 * MariaDB on disk and a real SMTP session by two senders. Counts what arrived.
 */
/** Fewer as an argument, for a quick look. */
const SITES = Number(process.argv[2] ?? 1_000);
const NOTICES_A_SITE = 10;
const PEOPLE = 10;
const MAILS = SITES * PEOPLE;

async function people(store: Store): Promise<void> {
	const rows = Array.from({ length: PEOPLE }, (_, i) => [
		...[`bench${i}@lodekeep.example`, `Bench ${i}`, 'B', 'maintenance', 1, 0, 'UTC']
	]);
	await store.pool.query(
		'INSERT INTO person (email, name, initials, role, all_sites, created_at_ms, timezone) VALUES ?',
		[rows]
	);
}

async function sites(store: Store): Promise<number[]> {
	const rows = Array.from({ length: SITES }, (_, i) => [`s${i}`, `Site ${i}`, 50, 10, 'UTC', 0]);
	await store.pool.query(
		'INSERT INTO site (slug, name, lat_deg, lon_deg, timezone, created_at_ms) VALUES ?',
		[rows]
	);
	const [found] = await store.pool.query('SELECT id FROM site ORDER BY id');
	return (found as { id: number }[]).map(({ id }) => id);
}

async function openNotices(store: Store, siteIds: readonly number[], nowMs: number): Promise<void> {
	const everybody = (await mailPeople.all(store.pool)).map(recipientOf);
	for (const siteId of siteIds) {
		const steps = Array.from({ length: NOTICES_A_SITE }, (_, i): Step => {
			const subject = {
				...{ about: `bench:${siteId}:${i}`, siteId, nodeId: null, bayId: null },
				...{ kinds: ['site_late' as const], sinceMs: nowMs, facts: { bays: [`B${i}`] } }
			};
			return { do: 'open', subject, kind: 'site_late', kinds: ['site_late'] };
		});
		const ground = { siteId, zone: 'UTC', people: everybody, nowMs };
		await transaction(store, async ({ sql }) => await apply(sql, ground, steps, new Map()));
	}
}

async function countingServer() {
	const ids = new Map<string, number>();
	const server = new SMTPServer({
		disabledCommands: ['AUTH', 'STARTTLS'],
		disableReverseLookup: true,
		onData: (stream, _session, done) => {
			const chunks: Buffer[] = [];
			stream.on('data', (chunk: Buffer) => chunks.push(chunk));
			stream.on('end', () => {
				const id = /^Message-ID: (<[^>]+>)/im.exec(Buffer.concat(chunks).toString('latin1'))?.[1];
				if (id !== undefined) ids.set(id, (ids.get(id) ?? 0) + 1);
				done();
			});
		}
	});
	await new Promise<void>((go) => server.listen(0, '127.0.0.1', go));
	const { port } = server.server.address() as AddressInfo;
	return { ids, server, url: `smtp://127.0.0.1:${port}` };
}

/** Hands over and notes how long each mail took, ms. */
function timed(delivery: Delivery, tookMs: number[]): Delivery {
	return {
		deliver: async (mail) => {
			const begun = performance.now();
			await delivery.deliver(mail);
			tookMs.push(performance.now() - begun);
		},
		close: () => {
			delivery.close();
		}
	};
}

function p99(values: readonly number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	return Math.round((sorted[Math.ceil(0.99 * sorted.length) - 1] ?? 0) * 10) / 10;
}

async function main(): Promise<void> {
	const database = await startDatabase({ disk: true });
	const store = connect(database.url, { connections: 20 });
	const mailServer = await countingServer();
	try {
		const secret = createSecret('a secret of the bench, of no other use');
		await people(store);
		const siteIds = await sites(store);
		const nowMs = Date.now();
		const begun = performance.now();
		await openNotices(store, siteIds, nowMs);
		const opened = performance.now();
		let composed = 0;
		const roundMs: number[] = [];
		for (let n = -1; n !== 0; composed += n) {
			const from = performance.now();
			n = await composeDue({ store, secret, origin: 'https://keep.example' }, nowMs);
			if (n > 0) roundMs.push((performance.now() - from) / n);
		}
		const written = performance.now();
		const parts = {
			...{
				db: store.db,
				secret,
				log: createLog({ level: 'silent', part: 'bench' }),
				lookEveryMs: 100
			},
			config: { smtpUrl: mailServer.url, mailFrom: 'keep@lodekeep.example', mailCatcherPort: 0 }
		};
		const tookMs: number[] = [];
		const senders = [1, 2].map(() =>
			startSender({ ...parts, delivery: timed(openDelivery(parts.config), tookMs) })
		);
		while (mailServer.ids.size < MAILS && performance.now() - written < 600_000)
			await new Promise((go) => setTimeout(go, 100));
		const arrived = performance.now();
		for (const sender of senders) await sender.close();
		const seconds = (from: number, to: number) => Math.round((to - from) / 100) / 10;
		const rate = (n: number, from: number, to: number) => Math.round(n / ((to - from) / 1000));
		const figures = {
			bench: 'outbox',
			...{
				notices: SITES * NOTICES_A_SITE,
				wishes: SITES * NOTICES_A_SITE * PEOPLE,
				mails: composed
			},
			...{ openS: seconds(begun, opened), composeS: seconds(opened, written) },
			...{ sendS: seconds(written, arrived), composedPerS: rate(composed, opened, written) },
			sentPerS: rate(mailServer.ids.size, written, arrived),
			...{ composeP99Ms: p99(roundMs), deliverP99Ms: p99(tookMs) },
			lost: MAILS - mailServer.ids.size,
			doubled: [...mailServer.ids.values()].filter((n) => n > 1).length
		};
		console.log(JSON.stringify(figures));
		if (figures.lost > 0) process.exitCode = 1;
	} finally {
		mailServer.server.close(() => undefined);
		await store.close();
		await database.close();
	}
}

await main();
