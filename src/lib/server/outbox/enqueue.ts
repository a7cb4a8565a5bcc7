import { createHash, randomUUID } from 'node:crypto';
import type { Secret } from '$lib/server/secret';
import * as outbox from '$lib/server/store/queries/outbox';
import type { Db } from '$lib/server/store/queries/people';
import type { Mail } from './mail';

export interface MailWanted {
	to: string;
	subject: string;
	text: string;
	demo: boolean;
	/** Two mails with one key are one mail. */
	dedupeKey?: string;
}

/** In the caller's transaction: the mail goes when and only when that commits. */
export async function enqueueMail(
	db: Db,
	secret: Secret,
	wanted: MailWanted,
	nowMs: number
): Promise<void> {
	const { dedupeKey, ...rest } = wanted;
	const mail: Mail = { ...rest, messageId: `<${randomUUID()}@lodekeep>` };
	await outbox.add(
		db,
		{
			kind: 'mail',
			payloadSealed: secret.seal('outbox', 'mail', Buffer.from(JSON.stringify(mail))),
			dedupe:
				dedupeKey === undefined
					? null
					: createHash('sha256').update(dedupeKey).digest().subarray(0, 16)
		},
		nowMs
	);
}
