import { DESK_ROUTES } from '$lib/schemas/desk';
import { created, ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { rfc3339 } from '$lib/server/api/time';
import { personIdOf } from '$lib/server/auth/reach';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import { byCode } from '$lib/server/store/queries/bays';
import { openRequests } from '$lib/server/store/queries/desk-looks';
import * as requests from '$lib/server/store/queries/desk-requests';
import { ofBay } from '$lib/server/store/queries/nodes';

export const GET = siteRoute(DESK_ROUTES.requests, async ({ app, site, reach }) => {
	const me = personIdOf(reach);
	const rows = await openRequests(app.store.db, site.id);
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

/** One open request a bay; everybody who does maintenance there gets a mail. */
export const POST = siteRoute(DESK_ROUTES.request, async (ctx) => {
	const { app, site, reach, body, nowMs, event } = ctx;
	const askedBy = personIdOf(reach);
	if (askedBy === null) return problem(403, 'Only a person asks for somebody.');
	const answer = await ctx.write(async ({ db }) => {
		const bay = await byCode(db, site.id, body.bay);
		if (bay === null) return problem(404, `There is no bay ${body.bay}.`);
		if ((await requests.openOfBay(db, bay.id)) !== null) {
			return problem(409, `Somebody is sent for already to ${body.bay}.`);
		}
		const node = await ofBay(db, bay.id);
		const id = await requests.create(db, {
			siteId: site.id,
			bayId: bay.id,
			nodeId: node?.id ?? null,
			reason: body.reason,
			askedBy,
			askedAtMs: nowMs
		});
		const link = `${app.config.origin ?? event.url.origin}/sites/${site.slug}/bays/${body.bay}`;
		for (const to of await requests.fitters(db, site.id)) {
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
