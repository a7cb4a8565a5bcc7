import { createTransport } from 'nodemailer';
import type { Config } from '$lib/server/config';
import type { Log } from '$lib/server/log';
import type { Secret } from '$lib/server/secret';
import type { Database } from '$lib/server/store/connect';
import * as outbox from '$lib/server/store/queries/outbox';
import { backoffMs, GIVE_UP_MS } from './backoff';
import { mail, type Mail } from './mail';

const LEASE_MS = 120_000;
const LOOK_EVERY_MS = 2_000;
const AT_ONCE = 10;

export interface Sender {
	/** Something was enqueued: look now. */
	readonly wake: () => void;
	/** Lets the mail on its way finish. */
	close(): Promise<void>;
}

interface Parts {
	db: Database;
	secret: Secret;
	log: Log;
	config: Pick<Config, 'smtpUrl' | 'mailFrom' | 'mailCatcherPort'>;
}

type Deliver = (m: Mail) => Promise<void>;

const timeouts = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 20_000 };

/** Through SMTP_URL, or to the catcher; mail of the demo only ever to the catcher. */
function delivery(config: Parts['config']): Deliver {
	const catcher =
		config.mailCatcherPort === 0
			? null
			: createTransport({
					host: '127.0.0.1',
					port: config.mailCatcherPort,
					secure: false,
					ignoreTLS: true,
					...timeouts
				});
	const outside = config.smtpUrl === null ? catcher : createTransport(config.smtpUrl, timeouts);
	return async (m) => {
		const transport = m.demo ? catcher : outside;
		if (transport === null) throw new Error('no mail server is set: SMTP_URL is missing');
		await transport.sendMail({
			from: config.mailFrom,
			to: m.to,
			subject: m.subject,
			text: m.text,
			messageId: m.messageId,
			headers: { 'Auto-Submitted': 'auto-generated' }
		});
	};
}

/** Sends what waits in the outbox, at least once each, until closed. */
export function startSender(parts: Parts): Sender {
	const deliver = delivery(parts.config);
	let closed = false;
	let woken: (() => void) | null = null;
	let timer: NodeJS.Timeout | undefined;

	const rest = async (): Promise<void> => {
		await new Promise<void>((go) => {
			woken = go;
			timer = setTimeout(go, LOOK_EVERY_MS);
			timer.unref();
		});
		clearTimeout(timer);
		woken = null;
	};
	const loop = async (): Promise<void> => {
		while (!closed) {
			const busy = await sendDue(parts, deliver).catch((error: unknown) => {
				parts.log.debug({ reason: reasonOf(error) }, 'outbox: the database is away');
				return false;
			});
			if (!busy && !closed) await rest();
		}
	};
	const running = loop();
	return {
		wake: () => woken?.(),
		close: async () => {
			closed = true;
			woken?.();
			await running;
		}
	};
}

/** One round; true when there may be more. */
async function sendDue(parts: Parts, deliver: Deliver): Promise<boolean> {
	const rows = await outbox.claim(parts.db, 'mail', {
		nowMs: Date.now(),
		leaseMs: LEASE_MS,
		limit: AT_ONCE
	});
	for (const row of rows) await sendOne(parts, deliver, row);
	return rows.length === AT_ONCE;
}

async function sendOne(parts: Parts, deliver: Deliver, row: outbox.Claimed): Promise<void> {
	const opened = parts.secret.open('outbox', 'mail', row.payloadSealed);
	const parsed = opened.ok ? mail.safeParse(JSON.parse(opened.bytes.toString('utf8'))) : null;
	try {
		if (parsed?.success !== true) throw new Error('the sealed mail cannot be opened');
		await deliver(parsed.data);
		await outbox.sent(parts.db, row.id, Date.now());
	} catch (error) {
		const nowMs = Date.now();
		const tries = row.tries + 1;
		const over = nowMs - row.createdAtMs > GIVE_UP_MS;
		await outbox.failed(parts.db, row.id, {
			error: reasonOf(error),
			notBeforeMs: nowMs + backoffMs(tries),
			givenUpAtMs: over ? nowMs : null
		});
		parts.log.warn({ mail: row.id, tries, over, reason: reasonOf(error) }, 'mail not sent');
	}
}

/** The first line, without addresses and text of the mail. */
const reasonOf = (error: unknown): string =>
	(error instanceof Error ? error.message : String(error)).split('\n')[0]?.slice(0, 200) ?? '';
