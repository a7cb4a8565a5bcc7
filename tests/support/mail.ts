import type { AddressInfo } from 'node:net';
import { simpleParser, type ParsedMail } from 'mailparser';
import { SMTPServer } from 'smtp-server';

export interface MailBox {
	/** For SMTP_URL. */
	url: string;
	mails: ParsedMail[];
	/** The next mail to this address whose subject holds the text. */
	next(to: string, subject: string, waitMs?: number): Promise<ParsedMail>;
	/** Refuses the next n mails with a temporary error. */
	refuse(n: number): void;
	close(): Promise<void>;
}

/** A mail server of the test's own that takes everything. */
export async function openMailBox(): Promise<MailBox> {
	const mails: ParsedMail[] = [];
	let refusals = 0;
	const server = new SMTPServer({
		disabledCommands: ['AUTH', 'STARTTLS'],
		onData: (stream, _session, callback) => {
			const chunks: Buffer[] = [];
			stream.on('data', (chunk: Buffer) => chunks.push(chunk));
			stream.on('end', () => {
				if (refusals-- > 0) {
					callback(Object.assign(new Error('try later'), { responseCode: 451 }));
					return;
				}
				void simpleParser(Buffer.concat(chunks)).then((mail) => {
					mails.push(mail);
					callback();
				});
			});
		}
	});
	await new Promise<void>((go) => server.listen(0, '127.0.0.1', go));
	const { port } = server.server.address() as AddressInfo;
	const taken = new Set<ParsedMail>();
	return {
		url: `smtp://127.0.0.1:${port}`,
		mails,
		next: async (to, subject, waitMs = 15_000) => {
			const endMs = Date.now() + waitMs;
			while (Date.now() < endMs) {
				const found = mails.find(
					(m) => !taken.has(m) && textOf(m).to.includes(to) && m.subject?.includes(subject) === true
				);
				if (found !== undefined) {
					taken.add(found);
					return found;
				}
				await new Promise((go) => setTimeout(go, 50));
			}
			throw new Error(`no mail '${subject}' came to ${to}`);
		},
		refuse: (n) => (refusals = n),
		close: async () => {
			await new Promise<void>((go) => {
				server.close(go);
			});
		}
	};
}

const textOf = (mail: ParsedMail): { to: string } => {
	const to = Array.isArray(mail.to) ? mail.to : mail.to === undefined ? [] : [mail.to];
	return { to: to.map((a) => a.text).join(', ') };
};
