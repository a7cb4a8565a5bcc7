import { randomBytes } from 'node:crypto';
import type { Secret } from './secret';
import type { Database } from './store/connect';
import * as installation from './store/queries/installation';

const NAME = 'secret_check';

export type SecretCheck = { ok: true } | { ok: false; reason: string };

/**
 * Refuses a secret that cannot open what is stored. The first start seals a value under its secret;
 * every later one must open it, with the present or the previous secret.
 */
export async function checkSecret(db: Database, secret: Secret): Promise<SecretCheck> {
	const fresh = secret.seal('check', NAME, randomBytes(16));
	const kept = await installation.readOrWrite(db, NAME, fresh);
	return secret.open('check', NAME, kept).ok
		? { ok: true }
		: {
				ok: false,
				reason:
					'LODEKEEP_SECRET is not the one this database was made with: node keys could not be opened. Start with the former secret, or give it as LODEKEEP_SECRET_PREVIOUS.'
			};
}
