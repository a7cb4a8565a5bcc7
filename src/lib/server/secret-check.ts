import { randomBytes } from 'node:crypto';
import type { Secret } from './secret';
import type { Database } from './store/connect';
import * as installation from './store/queries/installation';
import * as sealed from './store/queries/sealed';

const NAME = 'secret_check';

export type SecretCheck = { ok: true; /** Values sealed anew. */ renewed: number } | Refused;
type Refused = { ok: false; reason: string };

/**
 * Refuses a secret that cannot open what is stored. The first start seals a value under its secret;
 * every later one must open it, with the present or the previous secret. When only the previous one
 * opens it, everything sealed is renewed under the present one, the check value last: so a start
 * that is killed in between is finished by the next, and the previous secret can then be left out.
 */
export async function checkSecret(db: Database, secret: Secret): Promise<SecretCheck> {
	const fresh = secret.seal('check', NAME, randomBytes(16));
	const kept = await installation.readOrWrite(db, NAME, fresh);
	const opened = secret.open('check', NAME, kept);
	if (!opened.ok)
		return {
			ok: false,
			reason:
				'LODEKEEP_SECRET is not the one this database was made with: node keys could not be opened. Start with the former secret, or give it as LODEKEEP_SECRET_PREVIOUS.'
		};
	if (!opened.previous) return { ok: true, renewed: 0 };
	const renewed = await renew(db, secret);
	await installation.overwrite(db, NAME, secret.seal('check', NAME, opened.bytes));
	return { ok: true, renewed };
}

async function renew(db: Database, secret: Secret): Promise<number> {
	let renewed = 0;
	for (const value of await sealed.list(db)) {
		const [purpose, aad] =
			value.column === 'payloadSealed'
				? (['outbox', 'mail'] as const)
				: (['node key', value.id] as const);
		const opened = secret.open(purpose, aad, value.bytes);
		if (!opened.ok || !opened.previous) continue;
		await sealed.replace(db, value, secret.seal(purpose, aad, opened.bytes));
		renewed += 1;
	}
	return renewed;
}
