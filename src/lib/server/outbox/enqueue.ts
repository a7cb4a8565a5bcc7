import { createHash, randomUUID } from 'node:crypto';
import type { Secret } from '$lib/server/secret';
import * as outbox from '$lib/server/store/queries/outbox';
import type { Db } from '$lib/server/store/queries/people';
import type { Mail } from './mail';

export interface MailWanted extends Omit<Mail, 'messageId'> {
	messageId?: string;
	/** Two mails with one key are one mail. */
	dedupeKey?: string;
	/** The person it is for: what the mail server says of it is shown to admins. */
	personId?: number;
}

/** Its right half is no host that takes mail; RFC 5322 asks only that the whole is unique. */
export const newMessageId = (): string => `<${randomUUID()}@lodekeep>`;

/** In the caller's transaction: the mail goes when and only when that commits. Returns its Message-ID. */
export async function enqueueMail(
	db: Db,
	secret: Secret,
	wanted: MailWanted,
	nowMs: number
): Promise<string> {
	const { dedupeKey, personId, messageId = newMessageId(), ...rest } = wanted;
	const mail: Mail = { ...rest, messageId };
	await outbox.add(
		db,
		{
			kind: 'mail',
			payloadSealed: secret.seal('outbox', 'mail', Buffer.from(JSON.stringify(mail))),
			dedupe:
				dedupeKey === undefined
					? null
					: createHash('sha256').update(dedupeKey).digest().subarray(0, 16),
			...{ personId: personId ?? null, messageId, about: rest.subject }
		},
		nowMs
	);
	return messageId;
}
