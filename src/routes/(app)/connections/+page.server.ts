import { connectionsWords } from '$lib/format/messages/connections';
import { SCOPES, SCOPES_OF_ROLE } from '$lib/schemas/roles';
import { instance } from '$lib/server/api/instance';
import { makeKey } from '$lib/server/auth/make-key';
import { requireRole } from '$lib/server/auth/page-guard';
import { personIdOf, reaches, type Reach } from '$lib/server/auth/reach';
import * as audit from '$lib/server/store/queries/audit';
import { listed } from '$lib/server/store/queries/desk-sites';
import * as keys from '$lib/server/store/queries/keys';
import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import type { Actions, PageServerLoad } from './$types';

const ROLES = ['integrator', 'admin'] as const;

/** Admins see every key; others their own. */
const visible = (reach: Reach, key: { makerId: number | null }) =>
	reach.role === 'admin' || key.makerId === personIdOf(reach);

export const load: PageServerLoad = async ({ locals }) => {
	const reach = requireRole(locals, ROLES);
	const { db } = instance().store;
	const [all, sites] = await Promise.all([keys.list(db), listed(db, reach.sites)]);
	return {
		keys: all.filter((key) => visible(reach, key)),
		siteList: sites,
		scopes: SCOPES_OF_ROLE[reach.role],
		mayGiveAll: reach.sites === 'all',
		nowMs: Date.now()
	};
};

const trouble = () => connectionsWords().trouble;
const wanted = z.object({
	name: z
		.string()
		.trim()
		.min(1, { error: () => trouble().name })
		.max(120),
	scopes: z.array(z.enum(SCOPES)).min(1, { error: () => trouble().scope }),
	sites: z.union([z.literal('all'), z.array(z.string()).min(1, { error: () => trouble().site })]),
	origins: z.string().max(2000),
	expires: z.union([z.literal(''), z.iso.date()])
});

export const actions: Actions = {
	make: async ({ locals, request }) => {
		const reach = requireRole(locals, ROLES);
		const data = await request.formData();
		const form = wanted.safeParse({
			name: data.get('name'),
			scopes: data.getAll('scope'),
			sites: data.get('all') === 'on' ? 'all' : data.getAll('site'),
			origins: data.get('origins') ?? '',
			expires: data.get('expires') ?? ''
		});
		if (!form.success)
			return fail(400, { trouble: form.error.issues[0]?.message ?? trouble().incomplete });
		// A key can do no more than its maker.
		const given = SCOPES_OF_ROLE[reach.role];
		const beyond = form.data.scopes.find((scope) => !given.includes(scope));
		if (beyond !== undefined) return fail(403, { trouble: trouble().beyond(beyond) });
		const app = instance();
		const sites = await listed(app.store.db, 'all');
		const chosen = form.data.sites;
		const out =
			chosen === 'all'
				? reach.sites !== 'all'
				: chosen.some((slug) => {
						const site = sites.find((s) => s.slug === slug);
						return site === undefined || !reaches(reach, site.id);
					});
		if (out) return fail(403, { trouble: trouble().notYours });
		const made = await makeKey(app.store.db, {
			name: form.data.name,
			scopes: form.data.scopes,
			sites: chosen,
			origins: form.data.origins.split(/\s+/).filter((origin) => origin !== ''),
			makerId: personIdOf(reach),
			expiresAtMs: form.data.expires === '' ? null : Date.parse(form.data.expires)
		});
		if (!made.ok) return fail(400, { trouble: `${made.reason}.` });
		await audit.note(
			app.store.db,
			{ actor: reach.actor, what: 'key.made', subject: form.data.name },
			Date.now()
		);
		app.directory.invalidate();
		return { made: { name: form.data.name, key: made.key } };
	},
	revoke: async ({ locals, request }) => {
		const reach = requireRole(locals, ROLES);
		const id = Number((await request.formData()).get('id'));
		const app = instance();
		const key = (await keys.list(app.store.db)).find((k) => k.id === id);
		if (key === undefined || !visible(reach, key)) return fail(404, { trouble: trouble().noKey });
		await keys.revoke(app.store.db, id, Date.now());
		await audit.note(
			app.store.db,
			{ actor: reach.actor, what: 'key.revoked', subject: key.name },
			Date.now()
		);
		app.directory.invalidate();
		return { revoked: key.name };
	}
};
