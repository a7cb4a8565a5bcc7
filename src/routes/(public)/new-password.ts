import { publicWords } from '$lib/format/messages/public';
import { z } from 'zod';

/** The form of a new password, typed twice. */
export const newPassword = z
	.object({
		ticket: z.string().max(200).catch(''),
		password: z.string().max(1000),
		again: z.string().max(1000)
	})
	.refine((form) => form.password === form.again, {
		error: () => publicWords().trouble.differ,
		path: ['again']
	});

export const troubleOf = (error: z.ZodError): string =>
	error.issues[0]?.message ?? publicWords().trouble.missing;
/** Why a password was not taken, as a sentence. */
export function passwordSentence(why: string): string {
	const said = publicWords().trouble;
	const [figure] = /\d+/.exec(why) ?? [];
	if (figure === undefined) return why.startsWith('not') ? said.own : said.different;
	return /^at most/.test(why) ? said.most(figure) : said.least(figure);
}
