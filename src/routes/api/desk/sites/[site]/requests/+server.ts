import { DESK_ROUTES } from '$lib/schemas/desk';
import { created, ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { rfc3339 } from '$lib/server/api/time';
import { personIdOf } from '$lib/server/auth/reach';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import { byCode } from '$lib/server/store/queries/bays';
import { openRequests } from '$lib/server/store/queries/desk-looks';
import { fitters } from '$lib/server/store/queries/desk-requests';
import { ofBay } from '$lib/server/store/queries/nodes';
import { ask } from '$lib/server/visits/ask';

/** Integrators' plans ask too, and see nothing of it. */
export const GET = siteRoute(DESK_ROUTES.requests, async ({ app, site, reach }) => {
	const me = personIdOf(reach);
	const rows = reach.role === 'integrator' ? [] : await openRequests(app.store.db, site.id);
	return ok({
		items: rows.map((row) => ({
			id: row.id,
			bay: row.bay,
			reason: row.reason,
			askedAt: rfc3339(row.askedAtMs),
			takenAt: row.takenAtMs === null ? null : rfc3339(row.takenAtMs),
			taker:
				row.takerName === null ? null : { name: row.takerName, initials: row.takerInitials ?? '' },
			mine: row.takenBy !== null && row.takenBy === me
		}))
	});
});

/** One open request a bay, a person's wish is added to a rule's; maintenance there gets a mail. */
export const POST = siteRoute(DESK_ROUTES.request, async (ctx) => {
	const { app, site, reach, body, nowMs, event } = ctx;
	const askedBy = personIdOf(reach);
	if (askedBy === null) return problem(403, 'Only a person asks for somebody.');
	const answer = await ctx.write(async ({ db, sql }) => {
		const bay = await byCode(db, site.id, body.bay);
		if (bay === null) return problem(404, `There is no bay ${body.bay}.`);
		const node = await ofBay(db, bay.id);
		const id = await ask(
			sql,
			{ siteId: site.id, bayId: bay.id, nodeId: node?.id ?? null, reason: body.reason, askedBy },
			nowMs
		);
		if (id === null) return problem(409, `Somebody is sent for already to ${body.bay}.`);
		const link = `${app.config.origin ?? event.url.origin}/sites/${site.slug}/visits`;
		for (const to of await fitters(db, site.id)) {
			await enqueueMail(
				db,
				app.secret,
				{
					to: to.email,
					subject: `${site.name}, ${body.bay}: somebody is needed`,
					text: `${to.name},\n\n${reach.name} asks for somebody at ${body.bay} of ${site.name}:\n\n${body.reason}\n\n${link}\n`,
					demo: to.demo || site.demo
				},
				nowMs
			);
		}
		return created({ id }, null);
	});
	app.sender.wake();
	return answer;
});
