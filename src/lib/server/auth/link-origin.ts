import { getRequestEvent } from '$app/server';
import type { Instance } from '$lib/server/api/instance';

/**
 * Where a link in a mail leads. Without ORIGIN the launcher has seen to it that the address of a
 * request comes from headers that the operator's own proxy sets.
 */
export const linkOrigin = (app: Instance): string =>
	app.config.origin ?? getRequestEvent().url.origin;
