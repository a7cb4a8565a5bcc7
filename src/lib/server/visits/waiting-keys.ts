import { createHmac } from 'node:crypto';
import { createSecret } from '$lib/server/secret';

/**
 * Keys (32 bytes, base64) that seal what a person recorded while it waits in their browser: the one in use
 * first, then that of the former secret, so that nothing becomes unreadable when the secret changes.
 */
export const waitingKeys = (secrets: readonly (string | null)[], personId: number): string[] =>
	secrets
		.filter((secret) => secret !== null)
		.map((secret) =>
			createHmac('sha256', createSecret(secret).derive('waiting'))
				.update(`person:${personId}`)
				.digest('base64')
		);
