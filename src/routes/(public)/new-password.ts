import { z } from 'zod';

/** The form of a new password, typed twice. */
export const newPassword = z
	.object({
		ticket: z.string().max(200).catch(''),
		password: z.string().max(1000),
		again: z.string().max(1000)
	})
	.refine((form) => form.password === form.again, {
		message: 'The two passwords differ.',
		path: ['again']
	});

export const troubleOf = (error: z.ZodError): string =>
	error.issues[0]?.message ?? 'Something is missing.';
/** Why a password was not taken, as a sentence. */
export const passwordSentence = (why: string): string =>
	`The password must have ${why}.`.replace('must have not', 'must not be');
