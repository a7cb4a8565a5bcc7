import type { Role, Scope } from '$lib/schemas/roles';

/** Who asks, what they may do and which sites they may see: the one thing every route checks. */
export interface Reach {
	readonly actor: `person:${number}` | `key:${number}`;
	/** null for an API key. */
	readonly role: Role | null;
	readonly scopes: ReadonlySet<Scope>;
	readonly sites: 'all' | ReadonlySet<number>;
	/** Whether bays marked personal may be seen. */
	readonly personalAllowed: boolean;
	readonly name: string;
	/** A generated or reset password: nothing but changing it is allowed. */
	readonly mustChangePassword: boolean;
}

export const reaches = (reach: Reach, siteId: number): boolean =>
	reach.sites === 'all' || reach.sites.has(siteId);

/** The numeric id behind `person:<id>`, null for a key. */
export const personIdOf = (reach: Reach): number | null =>
	reach.actor.startsWith('person:') ? Number(reach.actor.slice('person:'.length)) : null;

/** The numeric id behind `key:<id>`, null for a person. */
export const keyIdOf = (reach: Reach): number | null =>
	reach.actor.startsWith('key:') ? Number(reach.actor.slice('key:'.length)) : null;

/** Same text for the same view of the data: part of every ETag. */
export function reachStamp(reach: Reach): string {
	const sites = reach.sites === 'all' ? 'all' : [...reach.sites].sort((a, b) => a - b).join(',');
	return [
		reach.role ?? 'key',
		[...reach.scopes].sort().join(','),
		sites,
		reach.personalAllowed ? 'p' : '-'
	].join('|');
}
