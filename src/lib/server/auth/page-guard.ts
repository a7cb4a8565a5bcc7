import { errorWords } from '$lib/format/messages/error';
import { error } from '@sveltejs/kit';
import type { Role } from '$lib/schemas/roles';
import type { Reach } from './reach';

/** For loads and form actions of sheets that only some roles may open: the person, or a 403. */
export function requireRole(
	locals: { reach: Reach | null },
	roles: readonly Role[]
): Reach & { role: Role } {
	const { reach } = locals;
	if (reach?.role == null) error(401, errorWords().signIn);
	if (reach.mustChangePassword || !roles.includes(reach.role)) {
		error(403, errorWords().askAdmin);
	}
	return { ...reach, role: reach.role };
}
