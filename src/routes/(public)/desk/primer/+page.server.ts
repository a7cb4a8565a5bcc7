import { dev } from '$app/environment';
import { error } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

/** The primer shows every primitive: for development, and for an admin. */
export const load: PageServerLoad = ({ locals, url }) => {
	if (!dev && locals.reach?.role !== 'admin') error(404, 'There is no such sheet.');
	return { bays: Number(url.searchParams.get('bays') ?? 40) };
};
