import { createTransport, type Transporter } from 'nodemailer';
import type { Config } from '$lib/server/config';
import type { Mail } from './mail';

export interface Delivery {
	/** Resolves when the mail server has taken it; rejects with its reply. */
	deliver(mail: Mail): Promise<void>;
	close(): void;
}

type MailConfig = Pick<Config, 'smtpUrl' | 'mailFrom' | 'mailCatcherPort'>;

const TIMEOUTS = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 20_000 };
/** Kept open between mails; mail servers dislike more from one sender. */
const POOL = { pool: true, maxConnections: 4, maxMessages: 200 } as const;

/** Through SMTP_URL, or to the catcher; mail of the demo only ever to the catcher. */
export function openDelivery(config: MailConfig): Delivery {
	const catcher =
		config.mailCatcherPort === 0
			? null
			: createTransport({
					host: '127.0.0.1',
					port: config.mailCatcherPort,
					secure: false,
					ignoreTLS: true,
					...POOL,
					...TIMEOUTS
				});
	const outside = config.smtpUrl === null ? catcher : outsideOf(config.smtpUrl);
	return {
		deliver: async (mail) => {
			const transport = mail.demo ? catcher : outside;
			if (transport === null) throw new Error('no mail server is set: SMTP_URL is missing');
			await transport.sendMail(messageOf(mail, config.mailFrom));
		},
		close: () => {
			catcher?.close();
			outside?.close();
		}
	};
}

/** smtps:// speaks TLS from the first byte, smtp:// takes STARTTLS where it is offered (and to insist: ?requireTLS=true). */
const outsideOf = (url: string): Transporter => createTransport({ url, ...POOL, ...TIMEOUTS });

function messageOf(mail: Mail, from: string) {
	const { references = [], unsubscribeUrl } = mail;
	const last = references.at(-1);
	return {
		...{ from, to: mail.to, subject: mail.subject, text: mail.text, messageId: mail.messageId },
		...(mail.html === undefined ? {} : { html: mail.html }),
		...(last === undefined ? {} : { inReplyTo: last, references }),
		attachments: (mail.inline ?? []).map(({ cid, name, pngBase64 }) => ({
			...{ cid, filename: name, contentType: 'image/png', contentDisposition: 'inline' as const },
			...{ content: pngBase64, encoding: 'base64' }
		})),
		headers: {
			'Auto-Submitted': 'auto-generated',
			...(unsubscribeUrl === undefined
				? {}
				: {
						// RFC 2369 and RFC 8058, section 3.1.
						'List-Unsubscribe': { prepared: true, foldLines: false, value: `<${unsubscribeUrl}>` },
						'List-Unsubscribe-Post': 'List-Unsubscribe=One-Click'
					})
		}
	};
}
