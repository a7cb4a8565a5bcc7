import { ROUTES } from '$lib/schemas/v1/route-table';
import { created } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { route } from '$lib/server/api/route';
import { listSites, siteValues, siteView } from '$lib/server/api/sites';
import * as audit from '$lib/server/store/queries/audit';
import * as sites from '$lib/server/store/queries/sites';

export const GET = route(
	ROUTES['GET /sites'],
	async ({ app, reach, query }) =>
		await listSites(app, reach, { limit: query.limit, cursor: query.cursor })
);

export const POST = route(
	ROUTES['POST /sites'],
	async ({ body, reach, nowMs, write }) =>
		await write(async ({ db }) => {
			if ((await sites.bySlug(db, body.slug)) !== null) {
				return problem(409, `There is a site '${body.slug}' already.`);
			}
			const siteId = await sites.create(db, siteValues(body), nowMs);
			await audit.note(
				db,
				{ actor: reach.actor, siteId, what: 'site.made', subject: body.slug },
				nowMs
			);
			const row = await sites.byId(db, siteId);
			if (row === null) throw new Error('the site just made is not there');
			return created(siteView(row), `/api/v1/sites/${body.slug}`);
		})
);
