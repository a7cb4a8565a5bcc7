import type { Config } from '$lib/server/config';
import type { Log } from '$lib/server/log';
import type { Secret } from '$lib/server/secret';
import type { Database } from '$lib/server/store/connect';
import * as outbox from '$lib/server/store/queries/outbox';
import { backoffMs, GIVE_UP_MS } from './backoff';
import { mail } from './mail';
import { openDelivery, type Delivery } from './transport';

const LOOK_EVERY_MS = 2_000;
/** As many as are on their way at once: the lease holds for one mail's time, not for a queue's. */
const AT_ONCE = 8;
/** A server that dribbles its answers is not waited for longer. */
const ONE_MAIL_MS = 60_000;
/** Well over `ONE_MAIL_MS`: a row is not another's while this one is still sending it. */
const LEASE_MS = 120_000;

export interface Sender {
	/** Something was enqueued: look now. */
	readonly wake: () => void;
	/** Lets the mail on its way finish. */
	close(): Promise<void>;
}

export interface SenderParts {
	db: Database;
	secret: Secret;
	log: Log;
	config: Pick<Config, 'smtpUrl' | 'mailFrom' | 'mailCatcherPort'>;
	/** Tests and the bench watch and shorten. */
	lookEveryMs?: number;
	leaseMs?: number;
	oneMailMs?: number;
	now?: () => number;
	delivery?: Delivery;
}

type RoundParts = Omit<SenderParts, 'config' | 'delivery' | 'lookEveryMs'>;

/** Sends what waits in the outbox, at least once each, until closed. */
export function startSender(parts: SenderParts): Sender {
	const delivery = parts.delivery ?? openDelivery(parts.config);
	let closed = false;
	let woken: (() => void) | null = null;
	let timer: NodeJS.Timeout | undefined;

	const rest = async (): Promise<void> => {
		await new Promise<void>((go) => {
			woken = go;
			timer = setTimeout(go, parts.lookEveryMs ?? LOOK_EVERY_MS);
			timer.unref();
		});
		clearTimeout(timer);
		woken = null;
	};
	const loop = async (): Promise<void> => {
		while (!closed) {
			const busy = await sendRound(parts, delivery).catch((error: unknown) => {
				parts.log.debug({ reason: replyOf(error).text }, 'outbox: the database is away');
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
			delivery.close();
		}
	};
}

/** One round; true when there may be more. */
export async function sendRound(
	parts: RoundParts,
	delivery: Pick<Delivery, 'deliver'>
): Promise<boolean> {
	const rows = await outbox.claim(parts.db, 'mail', {
		nowMs: (parts.now ?? Date.now)(),
		leaseMs: parts.leaseMs ?? LEASE_MS,
		limit: AT_ONCE
	});
	const ends = await Promise.allSettled(
		rows.map(async (row) => {
			await sendOne(parts, delivery, row);
		})
	);
	// Sent but not written down: its lease ends and it goes once more, under the same Message-ID.
	for (const end of ends)
		if (end.status === 'rejected')
			parts.log.warn({ reason: replyOf(end.reason).text }, 'a mail’s end could not be stored');
	return rows.length === AT_ONCE;
}

async function sendOne(
	parts: RoundParts,
	delivery: Pick<Delivery, 'deliver'>,
	row: outbox.Claimed
): Promise<void> {
	const failure = await tryOne(parts, delivery, row);
	const nowMs = (parts.now ?? Date.now)();
	if (failure === null) {
		await outbox.sent(parts.db, row.id, nowMs);
		return;
	}
	const tries = row.tries + 1;
	const over = nowMs - row.createdAtMs > GIVE_UP_MS;
	parts.log.warn({ mail: row.id, tries, over, reply: failure.text }, 'mail not sent');
	await outbox.failed(parts.db, row.id, {
		...{ error: failure.text, code: failure.code, notBeforeMs: nowMs + backoffMs(tries) },
		givenUpAtMs: over ? nowMs : null
	});
}

/** null = the mail server has it. */
async function tryOne(
	parts: RoundParts,
	delivery: Pick<Delivery, 'deliver'>,
	row: outbox.Claimed
): Promise<Reply | null> {
	const opened = parts.secret.open('outbox', 'mail', row.payloadSealed);
	const parsed = opened.ok ? mail.safeParse(JSON.parse(opened.bytes.toString('utf8'))) : null;
	if (parsed?.success !== true) return { text: 'the sealed mail cannot be opened', code: 0 };
	let timer: NodeJS.Timeout | undefined;
	const late = new Promise<never>((_, fail) => {
		timer = setTimeout(() => {
			fail(new Error('the mail server took too long'));
		}, parts.oneMailMs ?? ONE_MAIL_MS);
	});
	try {
		await Promise.race([delivery.deliver(parsed.data), late]);
		return null;
	} catch (error) {
		return replyOf(error);
	} finally {
		clearTimeout(timer);
	}
}

interface Reply {
	text: string;
	/** SMTP reply code; 0 = none came. */
	code: number;
}

/** The mail server's reply, else the first line of what went wrong: no address, nothing of the mail. */
function replyOf(error: unknown): Reply {
	const { response, responseCode, message } = error as {
		response?: string;
		responseCode?: number;
		message?: string;
	};
	const text = (response ?? message ?? String(error)).split('\n')[0] ?? '';
	return { text: text.slice(0, 200), code: responseCode ?? 0 };
}
