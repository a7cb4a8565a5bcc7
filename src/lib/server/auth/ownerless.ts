import type { Log } from '$lib/server/log';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import type { Secret } from '$lib/server/secret';
import type { Database } from '$lib/server/store/connect';
import * as keys from '$lib/server/store/queries/keys';
import * as people from '$lib/server/store/queries/people';

const EVERY_MS = 60_000;

export interface OwnerlessWatch {
	close(): Promise<void>;
}

interface Parts {
	db: Database;
	secret: Secret;
	log: Log;
	/** Something was enqueued. */
	wake: () => void;
}

/** When the maker of a key leaves, the key works on and the admins are told, once a key (api.md). */
export async function tellOfOwnerless(parts: Parts, nowMs: number): Promise<number> {
	const { db, secret } = parts;
	const ownerless = (await keys.list(db)).filter(
		(key) => key.makerSwitchedOffAtMs !== null && key.revokedAtMs === null
	);
	if (ownerless.length === 0) return 0;
	const admins = await people.admins(db);
	for (const key of ownerless) {
		for (const admin of admins) {
			const text = [
				`${admin.name},`,
				'',
				`the API key '${key.name}' was made by ${key.maker ?? 'somebody'}, who is switched off now.`,
				'The key works on. Name an owner for it, or revoke it: see the sheet Connections.'
			].join('\n');
			const subject = `An API key without an owner: ${key.name}`;
			// Once for each key and leaving, however often this looks.
			const dedupeKey = `ownerless ${key.id} ${key.makerSwitchedOffAtMs} ${admin.id}`;
			const wanted = { to: admin.email, subject, text, demo: admin.demo, dedupeKey };
			await enqueueMail(db, secret, wanted, nowMs);
		}
	}
	return ownerless.length;
}

export function watchOwnerless(parts: Parts): OwnerlessWatch {
	let working: Promise<void> = Promise.resolve();
	const timer = setInterval(() => {
		working = tellOfOwnerless(parts, Date.now()).then(
			(n) => {
				if (n > 0) parts.wake();
			},
			() => {
				parts.log.debug('keys without an owner are looked for again: the database is away');
			}
		);
	}, EVERY_MS);
	timer.unref();
	return {
		close: async () => {
			clearInterval(timer);
			await working;
		}
	};
}
