import { randomBytes } from 'node:crypto';
import { createLog } from '$lib/server/log';
import { act as actOn } from '$lib/server/notices/acts';
import { composeDue } from '$lib/server/notices/compose-mail';
import { DriftFacts } from '$lib/server/notices/drift-facts';
import { lookRound } from '$lib/server/notices/worker';
import { startSender, type Sender } from '$lib/server/outbox/sender';
import { createSecret } from '$lib/server/secret';
import { connect, type Store } from '$lib/server/store/connect';
import type { NoticeAct } from '$lib/schemas/notices';
import { startDatabase, type TestDatabase } from './database';
import { openMailBox, type MailBox } from './mail';
import { seed, type Seeded } from './seed';

export const NOTICE_ORIGIN = 'https://keep.example';

/** A seeded database, a mail server and the notices' own work, run by hand at times of the test's choice. */
export class NoticeRoom {
	readonly secret = createSecret(randomBytes(24).toString('hex'));
	readonly drift = new DriftFacts();

	private constructor(
		readonly database: TestDatabase,
		readonly store: Store,
		readonly seeded: Seeded,
		readonly box: MailBox
	) {}

	static async open(): Promise<NoticeRoom> {
		const database = await startDatabase();
		const store = connect(database.url, { connections: 10 });
		return new NoticeRoom(database, store, await seed(store.db), await openMailBox());
	}

	async look(nowMs: number): Promise<void> {
		await lookRound(this.store, this.drift, nowMs - 3_600_000, nowMs);
	}

	async compose(nowMs: number): Promise<number> {
		const mails = await composeDue(
			{ store: this.store, secret: this.secret, origin: NOTICE_ORIGIN },
			nowMs
		);
		// The sender goes by the clock on the wall, which may stand before the test's.
		await this.rows('UPDATE outbox SET not_before_ms = 0 WHERE sent_at_ms IS NULL');
		return mails;
	}

	sender(more: Partial<Parameters<typeof startSender>[0]> = {}): Sender {
		return startSender({
			...{
				db: this.store.db,
				secret: this.secret,
				log: createLog({ level: 'silent', part: 'test' })
			},
			config: {
				smtpUrl: this.box.url,
				mailFrom: 'Lodekeep <keep@lodekeep.example>',
				mailCatcherPort: 0
			},
			lookEveryMs: 50,
			...more
		});
	}

	async act(personId: number, wanted: NoticeAct, nowMs: number) {
		return await actOn(this.store, { personId, act: wanted, zone: 'UTC' }, nowMs);
	}

	async rows<T>(text: string, values: unknown[] = []): Promise<T[]> {
		const [rows] = await this.store.pool.query(text, values);
		return rows as T[];
	}

	async close(): Promise<void> {
		await this.box.close();
		await this.store.close();
		await this.database.close();
	}
}

/** Writes a bay's condition as the pipeline would: the state, and a row of the site's change log. */
export async function showCondition(
	room: NoticeRoom,
	bay: string,
	shown: { condition: string; also?: string },
	nowMs: number
): Promise<void> {
	const { sites, bays } = room.seeded;
	await room.rows('UPDATE bay_state SET `condition` = ?, also = ? WHERE bay_id = ?', [
		shown.condition,
		shown.also ?? '',
		bays[bay]
	]);
	await room.rows('UPDATE site SET last_change = last_change + 1 WHERE id = ?', [sites.yard]);
	await room.rows(
		'INSERT INTO `change` (site_id, id, kind, bay_id, recorded_at_ms) SELECT id, last_change, ?, ?, ? FROM site WHERE id = ?',
		['condition', bays[bay], nowMs, sites.yard]
	);
}
