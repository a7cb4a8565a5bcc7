import { z } from 'zod';

/** A cursor is opaque to its reader: base64url of JSON, checked on its way back. */
export const encodeCursor = (value: unknown): string =>
	Buffer.from(JSON.stringify(value)).toString('base64url');

/** null when it is not one of ours. */
export function decodeCursor<T extends z.ZodType>(shape: T, text: string): z.infer<T> | null {
	try {
		const parsed: unknown = JSON.parse(Buffer.from(text, 'base64url').toString('utf8'));
		const checked = shape.safeParse(parsed);
		return checked.success ? checked.data : null;
	} catch {
		return null;
	}
}

export const idCursor = z.strictObject({ after: z.int() });
/** Pages of one reading of a changing list: the change id was fixed with the first page. */
export const fixedCursor = z.strictObject({ after: z.int(), changes: z.int() });
