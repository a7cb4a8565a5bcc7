import { z } from 'zod';

/** A mail as it waits in the outbox. Plain text; people's mail programs do the rest. */
export const mail = z.strictObject({
	to: z.email(),
	subject: z.string().min(1).max(200),
	text: z.string().min(1),
	/** The same on every try, so that a mail taken twice is shown once. */
	messageId: z.string(),
	/** To a person of the demo: never leaves the local catcher. */
	demo: z.boolean()
});
export type Mail = z.infer<typeof mail>;
