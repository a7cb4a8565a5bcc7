import { z } from 'zod';
import { SCOPES } from '../roles';
import { instant } from './common';

export const selfView = z.strictObject({
	name: z.string(),
	kind: z.enum(['key', 'person']),
	role: z.string().nullable(),
	scopes: z.array(z.enum(SCOPES)),
	sites: z.union([z.literal('all'), z.array(z.string())]),
	expiresAt: instant.nullable(),
	personalAllowed: z.boolean(),
	limits: z.strictObject({ requests: z.int(), windowS: z.int(), pageItems: z.int() })
});
