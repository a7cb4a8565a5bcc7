import { randomBytes } from 'node:crypto';
import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Config } from '../lib/server/config';

/** The installation's secret: given, or made once and kept beside the data. */
export async function installationSecret(config: Config): Promise<string> {
	if (config.secret !== null) return config.secret;
	const file = join(config.dataDir, 'secret');
	const kept = await readFile(file, 'utf8').catch(() => null);
	if (kept !== null && kept.trim().length >= 32) return kept.trim();
	const made = randomBytes(32).toString('base64url');
	await writeFile(file, `${made}\n`, { mode: 0o600 });
	return made;
}

/** Letters that cannot be taken for one another when read from paper. */
const ALPHABET = 'abcdefghjkmnpqrstuvwxyz23456789';
const GROUPS = 4;
const GROUP_LETTERS = 5;

/** A password to be typed from a screen: 99 bits in four groups. */
export function readablePassword(): string {
	const letter = () => {
		// Bytes past the last whole multiple would favour the first letters.
		for (;;) {
			const [byte] = randomBytes(1);
			if (byte !== undefined && byte < 256 - (256 % ALPHABET.length))
				return ALPHABET[byte % ALPHABET.length] ?? '';
		}
	};
	const group = () => Array.from({ length: GROUP_LETTERS }, letter).join('');
	return Array.from({ length: GROUPS }, group).join('-');
}
