import fc from 'fast-check';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { createLog } from '$lib/server/log';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import { sendRound } from '$lib/server/outbox/sender';
import type { Mail } from '$lib/server/outbox/mail';
import * as outbox from '$lib/server/store/queries/outbox';
import { NoticeRoom } from '../support/notices';

let room: NoticeRoom;
beforeAll(async () => {
	room = await NoticeRoom.open();
});
afterAll(async () => {
	await room.close();
});

const LEASE_MS = 120_000;
/** Longer than the longest pause between two tries (90 min with its spread) and than a lease. */
const LATER_MS = 100 * 60_000;

const ACTS = [
	'commit',
	'roll_back',
	'send',
	'refused',
	'no_answer',
	'dies_before',
	'dies_after',
	'time',
	'lease_over'
] as const;
type Act = (typeof ACTS)[number];

/** What reaches the mail server, whoever hands it over, and the mails that were promised. */
class World {
	nowMs = 1_800_000_000_000;
	readonly promised = new Set<string>();
	readonly rolledBack = new Set<string>();
	readonly got = new Map<string, number>();
	/** Handed over by a sender that died before it could say so. */
	readonly orphaned = new Set<string>();

	take(mail: Pick<Mail, 'messageId'>): void {
		this.got.set(mail.messageId, (this.got.get(mail.messageId) ?? 0) + 1);
	}

	async put(keep: boolean): Promise<void> {
		const wanted = { to: 'x@lodekeep.example', subject: 's', text: 't', demo: false };
		await room.store.db
			.transaction(async (tx) => {
				const id = await enqueueMail(tx, room.secret, wanted, this.nowMs);
				(keep ? this.promised : this.rolledBack).add(id);
				if (!keep) throw new Error('the cause was rolled back');
			})
			.catch(() => undefined);
	}

	/** One round of the real sender against a mail server that answers so. */
	async round(answer: (mail: Mail) => Promise<void>): Promise<void> {
		const log = createLog({ level: 'silent', part: 'test' });
		const { db } = room.store;
		await sendRound(
			{ db, secret: room.secret, log, leaseMs: LEASE_MS, now: () => this.nowMs },
			{ deliver: answer }
		);
	}

	/** A sender claims what is due and is killed, before or after the mail server has it. */
	async die(after: boolean): Promise<void> {
		const rows = await outbox.claim(room.store.db, 'mail', {
			...{ nowMs: this.nowMs, leaseMs: LEASE_MS, limit: 8 }
		});
		for (const row of after ? rows : []) {
			const opened = room.secret.open('outbox', 'mail', row.payloadSealed);
			if (!opened.ok) throw new Error('not opened');
			const mail = JSON.parse(opened.bytes.toString('utf8')) as Mail;
			this.take(mail);
			this.orphaned.add(mail.messageId);
		}
	}

	async act(act: Act): Promise<void> {
		if (act === 'commit' || act === 'roll_back') await this.put(act === 'commit');
		else if (act === 'send')
			await this.round(async (mail) => await Promise.resolve(this.take(mail)));
		else if (act === 'refused')
			await this.round(async () => {
				throw await Promise.resolve(Object.assign(new Error('451'), { responseCode: 451 }));
			});
		else if (act === 'no_answer')
			await this.round(async () => {
				throw await Promise.resolve(new Error('the mail server took too long'));
			});
		else if (act === 'dies_before' || act === 'dies_after') await this.die(act === 'dies_after');
		else this.nowMs += act === 'time' ? LATER_MS : LEASE_MS + 1;
	}
}

test('no sequence of events loses a mail; doubled is only what a sender handed over and died, under one Message-ID', async () => {
	await fc.assert(
		fc.asyncProperty(
			fc.array(fc.constantFrom(...ACTS), { minLength: 3, maxLength: 25 }),
			async (acts) => {
				await room.rows('DELETE FROM outbox');
				const world = new World();
				for (const act of acts) await world.act(act);
				for (let i = 0; i < 6; i += 1) {
					await world.act('time');
					await world.act('send');
				}
				expect([...world.promised].filter((id) => !world.got.has(id))).toEqual([]);
				expect([...world.rolledBack].filter((id) => world.got.has(id))).toEqual([]);
				for (const [id, times] of world.got)
					expect(times === 1 || world.orphaned.has(id), `${id} came ${times} times`).toBe(true);
			}
		),
		{ numRuns: 40 }
	);
}, 60_000);
