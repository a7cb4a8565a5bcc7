import { personIdOf, type Reach } from '$lib/server/auth/reach';
import { VISIT_PARAMS } from './params';

/** Who was at a place at a time, for those who may know it (product.md, 'Cautions'). */
export function namesOf(reach: Reach, names: ReadonlyMap<number, string>, nowMs: number) {
	const me = personIdOf(reach);
	return (personId: number | null, atMs: number): string | null => {
		if (personId === null || nowMs - atMs > VISIT_PARAMS.namesMs) return null;
		const may = personId === me || reach.role === 'admin';
		return may ? (names.get(personId) ?? null) : null;
	};
}
