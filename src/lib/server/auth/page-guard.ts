import { error } from '@sveltejs/kit';
import type { Role } from '$lib/schemas/roles';
import type { Reach } from './reach';

/** For loads and form actions of sheets that only some roles may open: the person, or a 403. */
export function requireRole(
	locals: { reach: Reach | null },
	roles: readonly Role[]
): Reach & { role: Role } {
	const { reach } = locals;
	if (reach?.role == null) error(401, 'Sign in first.');
	if (reach.mustChangePassword || !roles.includes(reach.role)) {
		error(403, 'Ask an admin if you need it.');
	}
	return { ...reach, role: reach.role };
}
