import type { RequestEvent } from '@sveltejs/kit';
import { reaches, type Reach } from '$lib/server/auth/reach';
import * as bays from '$lib/server/store/queries/bays';
import * as nodes from '$lib/server/store/queries/nodes';
import * as sites from '$lib/server/store/queries/sites';
import type { Instance } from './instance';
import { problem, type Problem } from './problem';

/** The same words whether it is not there or out of reach: nothing is told of other sites. */
export function notHere(reach: Reach): Problem {
	return reach.role === null
		? problem(404, "Not there, or not among this key's sites: see /self.")
		: problem(404, 'Not there, or not among your sites.');
}

export async function findSite(app: Instance, event: RequestEvent, reach: Reach) {
	const site = await sites.bySlug(app.store.db, event.params['site'] ?? '');
	if (site === null || !reaches(reach, site.id)) return notHere(reach);
	return { site, node: null };
}

export async function findNode(app: Instance, event: RequestEvent, reach: Reach) {
	const node = await nodes.bySerial(app.store.db, event.params['serial'] ?? '');
	if (node === null || !reaches(reach, node.siteId)) return notHere(reach);
	const site = await sites.byId(app.store.db, node.siteId);
	if (site === null) return notHere(reach);
	if (!reach.personalAllowed && node.bayId !== null) {
		const bay = await bays.byId(app.store.db, node.bayId);
		if (bay?.personal === true) return notHere(reach);
	}
	return { site, node };
}
