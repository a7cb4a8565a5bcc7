import type { AddressInfo } from 'node:net';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import { openDelivery } from '$lib/server/outbox/transport';
import { NoticeRoom } from '../support/notices';

let room: NoticeRoom;
beforeAll(async () => {
	room = await NoticeRoom.open();
	// The seed's conditions are no matter here.
	await room.rows("UPDATE bay_state SET `condition` = 'in_service', also = ''");
});
afterAll(async () => {
	await room.close();
});

const put = async (subject: string, to = 'maintenance') =>
	await enqueueMail(
		room.store.db,
		room.secret,
		{
			...{ to: `${to}@lodekeep.example`, subject, text: 'x', demo: false },
			personId: room.seeded.people[to as 'maintenance']
		},
		Date.now()
	);
const rowOf = async (about: string) => {
	const [row] = await room.rows<{
		sent: number | null;
		tries: number;
		code: number;
		error: string;
		given: number | null;
	}>(
		'SELECT sent_at_ms AS sent, tries, last_code AS code, last_error AS error, given_up_at_ms AS given FROM outbox WHERE about = ?',
		[about]
	);
	return row!;
};
const until = async (isSo: () => Promise<boolean>) => {
	const endMs = Date.now() + 15_000;
	while (!(await isSo())) {
		if (Date.now() > endMs) throw new Error('it did not come to be');
		await new Promise((go) => setTimeout(go, 30));
	}
};
/** The retry's wait is over. */
const hurry = async () =>
	await room.rows('UPDATE outbox SET not_before_ms = 0 WHERE sent_at_ms IS NULL');

test('a mail server that is down loses nothing', async () => {
	const down = room.sender({
		config: { smtpUrl: 'smtp://127.0.0.1:9', mailFrom: 'keep@lodekeep.example', mailCatcherPort: 0 }
	});
	await put('down');
	await until(async () => (await rowOf('down')).tries > 0 && (await rowOf('down')).error !== null);
	await down.close();
	expect(await rowOf('down')).toMatchObject({ sent: null, given: null });
	await hurry();
	const sender = room.sender();
	await room.box.next('maintenance@', 'down');
	await sender.close();
});

test('a sender that dies between the server’s acceptance and its own commit sends again under the same Message-ID', async () => {
	const messageId = await put('doubled');
	const real = openDelivery({
		...{ smtpUrl: room.box.url, mailFrom: 'keep@lodekeep.example', mailCatcherPort: 0 }
	});
	// Handed over, and then the sender is gone: what follows acceptance never happens.
	const gone = room.sender({
		leaseMs: 300,
		delivery: {
			deliver: async (mail) => {
				await real.deliver(mail);
				await new Promise(() => undefined);
			},
			close: () => undefined
		}
	});
	const before = await room.box.next('maintenance@', 'doubled');
	void gone.close();
	expect((await rowOf('doubled')).sent).toBeNull();
	await new Promise((go) => setTimeout(go, 400));
	const next = room.sender();
	const again = await room.box.next('maintenance@', 'doubled');
	await until(async () => (await rowOf('doubled')).sent !== null);
	await next.close();
	real.close();
	expect([before.messageId, again.messageId]).toEqual([messageId, messageId]);
});

test('of ten that two senders race for each is sent once', async () => {
	const senders = [room.sender(), room.sender()];
	const names = Array.from({ length: 10 }, (_, i) => `race ${i}.`);
	for (const name of names) await put(name);
	for (const name of names) await room.box.next('maintenance@', name);
	await until(async () => (await rowOf('race 9.')).sent !== null);
	for (const sender of senders) await sender.close();
	const got = room.box.mails.filter(({ subject }) => subject?.startsWith('race') === true);
	expect(got).toHaveLength(10);
});

test('one recipient refused: the others get theirs, the reply is kept, the admins are told', async () => {
	const mails: string[] = [];
	const server = new SMTPServer({
		disabledCommands: ['AUTH', 'STARTTLS'],
		onRcptTo: ({ address }, _session, done) => {
			const refused = address.startsWith('operator@');
			done(
				refused ? Object.assign(new Error('no such mailbox here'), { responseCode: 550 }) : null
			);
		},
		onData: (stream, _session, done) => {
			void simpleParser(stream).then((mail) => {
				mails.push(mail.subject ?? '');
				done();
			});
		}
	});
	await new Promise<void>((go) => server.listen(0, '127.0.0.1', go));
	const { port } = server.server.address() as AddressInfo;
	const sender = room.sender({
		config: {
			smtpUrl: `smtp://127.0.0.1:${port}`,
			mailFrom: 'keep@lodekeep.example',
			mailCatcherPort: 0
		}
	});
	await put('refused', 'operator');
	await put('taken');
	await until(
		async () => (await rowOf('taken')).sent !== null && (await rowOf('refused')).error !== null
	);
	await sender.close();
	await new Promise<void>((go) => {
		server.close(() => {
			go();
		});
	});
	expect(mails).toEqual(['taken']);
	expect(await rowOf('refused')).toMatchObject({ code: 550, sent: null, given: null });
	expect((await rowOf('refused')).error).toContain('550 no such mailbox here');
	await room.look(Date.now());
	expect(
		await room.rows("SELECT about FROM notice WHERE kind = 'mail_failing' AND closed_at_ms IS NULL")
	).toEqual([{ about: `mail:${room.seeded.people.operator}` }]);
	await hurry();
	const later = room.sender();
	await room.box.next('operator@', 'refused');
	await until(async () => (await rowOf('refused')).sent !== null);
	await later.close();
	await room.look(Date.now());
	expect(
		await room.rows("SELECT closed_how AS how FROM notice WHERE kind = 'mail_failing'")
	).toEqual([{ how: 'healed' }]);
});

test('after 48 hours it is given up, and a notice says so', async () => {
	await put('old');
	await room.rows('UPDATE outbox SET created_at_ms = created_at_ms - ? WHERE about = ?', [
		49 * 3_600_000,
		'old'
	]);
	room.box.refuse(1);
	const sender = room.sender();
	await until(async () => (await rowOf('old')).given !== null);
	await sender.close();
	expect(await rowOf('old')).toMatchObject({ sent: null, code: 451 });
	// Nothing else reached this person since.
	await room.rows("DELETE FROM outbox WHERE about <> 'old'");
	await room.look(Date.now());
	const notices = await room.rows<{ facts: string }>(
		"SELECT facts FROM notice WHERE kind = 'mail_failing' AND closed_at_ms IS NULL AND about = ?",
		[`mail:${room.seeded.people.maintenance}`]
	);
	expect(notices).toHaveLength(1);
	expect(notices[0]?.facts).toContain('451 try later');
});

test('a mail server that dribbles is not waited for; one that is slow is, and gets each mail once', async () => {
	const config = { smtpUrl: '', mailFrom: 'keep@lodekeep.example', mailCatcherPort: 0 };
	const got: string[] = [];
	/** Infinity: it takes the mail in and never answers. */
	let waitMs = Infinity;
	const slow = new SMTPServer({
		disabledCommands: ['AUTH', 'STARTTLS'],
		onData: (stream, _session, done) => {
			const dribbles = waitMs === Infinity;
			void simpleParser(stream).then((mail) => {
				if (dribbles) return;
				setTimeout(() => {
					got.push(mail.subject ?? '');
					done();
				}, waitMs);
			});
		}
	});
	await new Promise<void>((go) => slow.listen(0, '127.0.0.1', go));
	const smtpUrl = `smtp://127.0.0.1:${(slow.server.address() as AddressInfo).port}`;
	const hasty = room.sender({ config: { ...config, smtpUrl }, oneMailMs: 300 });
	await put('slow');
	await until(async () => (await rowOf('slow')).error !== null);
	await hasty.close();
	expect(await rowOf('slow')).toMatchObject({
		...{ sent: null, given: null, code: 0, error: 'the mail server took too long' }
	});
	waitMs = 700;
	await hurry();
	for (let i = 0; i < 4; i += 1) await put(`slow ${i}`);
	const patient = [1, 2].map(() => room.sender({ config: { ...config, smtpUrl } }));
	await until(async () => {
		const left = await room.rows(
			"SELECT id FROM outbox WHERE about LIKE 'slow%' AND sent_at_ms IS NULL"
		);
		return left.length === 0;
	});
	for (const sender of patient) await sender.close();
	await new Promise<void>((go) => {
		slow.close(() => {
			go();
		});
	});
	expect(got.sort()).toEqual(['slow', 'slow 0', 'slow 1', 'slow 2', 'slow 3']);
});

test('mail of the demo never leaves for the outside', async () => {
	const sent = room.box.mails.length;
	await enqueueMail(
		room.store.db,
		room.secret,
		{ to: 'x@demo.lodekeep.example', subject: 'demo only', text: 'x', demo: true },
		Date.now()
	);
	const sender = room.sender();
	await until(async () => (await rowOf('demo only')).error !== null);
	await sender.close();
	expect(room.box.mails).toHaveLength(sent);
});

test('the database restarted while mail is out: each mail comes, none twice but under its own Message-ID', async () => {
	let stopped = false;
	const real = openDelivery({
		...{ smtpUrl: room.box.url, mailFrom: 'keep@lodekeep.example', mailCatcherPort: 0 }
	});
	const ids = [await put('restart 0'), await put('restart 1'), await put('restart 2')];
	const sender = room.sender({
		leaseMs: 1_500,
		delivery: {
			deliver: async (mail) => {
				await real.deliver(mail);
				if (stopped) return;
				stopped = true;
				// Taken by the mail server, and the database is gone before that can be written down.
				await room.database.kill();
			},
			close: () => undefined
		}
	});
	await until(async () => await Promise.resolve(stopped));
	await room.database.start();
	await until(async () => {
		const left = await room
			.rows("SELECT id FROM outbox WHERE about LIKE 'restart%' AND sent_at_ms IS NULL")
			.catch(() => null);
		return left?.length === 0;
	});
	await sender.close();
	real.close();
	const got = room.box.mails.filter(({ subject }) => subject?.startsWith('restart') === true);
	expect(new Set(got.map(({ messageId }) => messageId))).toEqual(new Set(ids));
	expect(got.length).toBeGreaterThanOrEqual(3);
}, 60_000);
