import { randomBytes } from 'node:crypto';
import { mkdir, readdir, rename, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { SMTPServer } from 'smtp-server';

/** Mails kept; the oldest go first. They are for looking at, not an archive. */
const KEPT = 1_000;
/** A larger one is refused: nothing the product sends comes near. */
const MAX_BYTES = 10_000_000;
/** A burst of notices must not open files without end. */
const MAX_CLIENTS = 20;

export interface MailCatcher {
	readonly port: number;
	close(): Promise<void>;
}

/** Takes every mail on loopback and keeps each as a file `<ms>-<random>.eml`, 0600, in `dir`. */
export async function startMailCatcher(dir: string): Promise<MailCatcher> {
	await mkdir(dir, { recursive: true, mode: 0o700 });
	const server = new SMTPServer({
		banner: 'Lodekeep mail catcher',
		disabledCommands: ['AUTH', 'STARTTLS'],
		disableReverseLookup: true,
		size: MAX_BYTES,
		maxClients: MAX_CLIENTS,
		logger: false,
		onData: (stream, _session, done) => {
			void (async () => {
				try {
					const chunks: Buffer[] = [];
					for await (const chunk of stream) chunks.push(chunk as Buffer);
					if (stream.sizeExceeded) throw new Error('The mail is too large.');
					await keep(dir, Buffer.concat(chunks));
					done();
				} catch (error) {
					done(error as Error);
				}
			})();
		}
	});
	// A client that goes away in the middle is its own business.
	server.on('error', () => undefined);
	await new Promise<void>((resolve) => {
		server.listen(0, '127.0.0.1', () => {
			resolve();
		});
	});
	const address = server.server.address();
	return {
		port: typeof address === 'object' && address !== null ? address.port : 0,
		close: async () => {
			await new Promise<void>((resolve) => {
				server.close(() => {
					resolve();
				});
			});
		}
	};
}

/** Renamed into place, so that a reader never sees half a mail. */
async function keep(dir: string, bytes: Buffer): Promise<void> {
	const name = `${Date.now()}-${randomBytes(6).toString('hex')}.eml`;
	await writeFile(join(dir, `${name}.new`), bytes, { mode: 0o600 });
	await rename(join(dir, `${name}.new`), join(dir, name));
	const names = (await readdir(dir)).filter((file) => file.endsWith('.eml')).sort();
	for (const old of names.slice(0, Math.max(0, names.length - KEPT)))
		await rm(join(dir, old), { force: true });
}
