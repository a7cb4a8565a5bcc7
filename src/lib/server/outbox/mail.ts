import { z } from 'zod';

/** A mail as it waits in the outbox: every try sends the same bytes. */
export const mail = z.strictObject({
	to: z.email(),
	subject: z.string().min(1).max(200),
	text: z.string().min(1),
	html: z.string().optional(),
	/** Shown in the HTML by `cid:`. */
	inline: z
		.array(z.strictObject({ cid: z.string(), name: z.string(), pngBase64: z.string() }))
		.optional(),
	/** The same on every try, so that a mail taken twice is shown once. */
	messageId: z.string(),
	/** Earlier mails of the thread, oldest first. */
	references: z.array(z.string()).optional(),
	/** RFC 8058: an https (or http) address that takes a POST by itself. */
	unsubscribeUrl: z.string().optional(),
	/** To a person or of a site of the demo: never leaves the local catcher. */
	demo: z.boolean()
});
export type Mail = z.infer<typeof mail>;
