import type { Instance } from '$lib/server/api/instance';
import { list } from '$lib/server/store/queries/people';
import { personIdOf, type Reach } from './reach';

/** Product.md, 'Cautions': times of looks and visits show where a colleague was. */
const NAMED_MS = 90 * 86_400_000;

/**
 * Who did something, as this reader may know it: names are seen by the person and by admins and fall
 * away after 90 days; to others it was 'a colleague'.
 */
export async function namesFor(app: Instance, reach: Reach, nowMs: number) {
	const people = reach.role === 'admin' ? await list(app.store.db) : [];
	const me = personIdOf(reach);
	return (actor: string | null, atMs: number): string | null => {
		if (actor === null || actor === '') return null;
		if (actor === 'rule') return 'by rule';
		if (actor.startsWith('key:')) return 'a program';
		const id = Number(actor.replace(/^person:/, ''));
		if (!Number.isInteger(id)) return actor;
		if (nowMs - atMs > NAMED_MS) return 'a person';
		if (id === me) return 'you';
		return people.find((person) => person.id === id)?.name ?? 'a colleague';
	};
}
