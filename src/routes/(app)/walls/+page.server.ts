import { wallsWords } from '$lib/format/messages/walls';
import { instance } from '$lib/server/api/instance';
import { requireRole } from '$lib/server/auth/page-guard';
import { personIdOf, reaches, type Reach } from '$lib/server/auth/reach';
import { newTicket } from '$lib/server/auth/ticket';
import * as audit from '$lib/server/store/queries/audit';
import { listed } from '$lib/server/store/queries/desk-sites';
import * as links from '$lib/server/store/queries/wall-links';
import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import type { Actions, PageServerLoad } from './$types';

const ROLES = ['operator', 'maintenance', 'admin'] as const;

/** Links that show only sites within one's own reach: no more can be seen here than on the plans. */
const visible = (reach: Reach, link: { siteIds: readonly number[] }) =>
	link.siteIds.every((id) => reaches(reach, id));

export const load: PageServerLoad = async ({ locals }) => {
	const reach = requireRole(locals, ROLES);
	const { db } = instance().store;
	const [all, sites] = await Promise.all([links.list(db), listed(db, reach.sites)]);
	return {
		links: all.filter((link) => visible(reach, link)),
		siteList: sites,
		nowMs: Date.now()
	};
};

const trouble = () => wallsWords().trouble;
const wanted = z.object({
	name: z
		.string()
		.trim()
		.min(1, { error: () => trouble().name })
		.max(120),
	sites: z
		.array(z.string())
		.min(1, { error: () => trouble().site })
		.max(50),
	turnS: z.coerce
		.number({ error: () => trouble().turn })
		.int()
		.refine((s) => s === 0 || (s >= 10 && s <= 3600), {
			error: () => trouble().turn
		}),
	expires: z.union([z.literal(''), z.iso.date()], { error: () => trouble().day })
});

export const actions: Actions = {
	make: async ({ locals, request, url }) => {
		const reach = requireRole(locals, ROLES);
		const data = await request.formData();
		const form = wanted.safeParse({
			name: data.get('name'),
			sites: data.getAll('site'),
			turnS: data.get('turn') ?? '0',
			expires: data.get('expires') ?? ''
		});
		if (!form.success)
			return fail(400, { trouble: form.error.issues[0]?.message ?? trouble().incomplete });
		const app = instance();
		const nowMs = Date.now();
		const own = await listed(app.store.db, reach.sites);
		const chosen = own.filter(({ slug }) => form.data.sites.includes(slug));
		if (chosen.length !== new Set(form.data.sites).size)
			return fail(403, { trouble: trouble().notYours });
		const expiresAtMs = form.data.expires === '' ? null : Date.parse(form.data.expires);
		if (expiresAtMs !== null && expiresAtMs <= nowMs)
			return fail(400, { trouble: trouble().ahead });
		const ticket = newTicket();
		await links.create(
			app.store.db,
			{
				tokenHash: ticket.hash,
				name: form.data.name,
				turnS: form.data.turnS,
				siteIds: chosen.map(({ id }) => id),
				makerId: personIdOf(reach),
				expiresAtMs
			},
			nowMs
		);
		await audit.note(
			app.store.db,
			{ actor: reach.actor, what: 'wall.made', subject: form.data.name },
			nowMs
		);
		const href = `${app.config.origin ?? url.origin}/wall/${ticket.text}`;
		return { made: { name: form.data.name, href } };
	},
	revoke: async ({ locals, request }) => {
		const reach = requireRole(locals, ROLES);
		const id = Number((await request.formData()).get('id'));
		const app = instance();
		const link = (await links.list(app.store.db)).find((one) => one.id === id);
		if (link === undefined || !visible(reach, link))
			return fail(404, { trouble: trouble().noLink });
		const nowMs = Date.now();
		await links.revoke(app.store.db, id, nowMs);
		await audit.note(
			app.store.db,
			{ actor: reach.actor, what: 'wall.revoked', subject: link.name },
			nowMs
		);
		return { revoked: link.name };
	}
};
