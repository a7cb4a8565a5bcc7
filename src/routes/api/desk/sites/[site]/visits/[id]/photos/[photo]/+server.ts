import { DESK_VISIT_ROUTES, PHOTO_BYTES } from '$lib/schemas/visits';
import { file, noContent, ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { readBytes } from '$lib/server/api/read-body';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import * as photos from '$lib/server/visits/photos';
import { isUuid, refusalOf } from '$lib/server/visits/refusals';

const partsOf = (app: Parameters<Parameters<typeof siteRoute>[1]>[0]['app']) => ({
	store: app.store,
	dataDir: app.config.dataDir
});

export const GET = siteRoute(DESK_VISIT_ROUTES.photo, async ({ app, site, event }) => {
	const { id = '', photo = '' } = event.params;
	const which = { siteId: site.id, visitId: Number(id), id: photo };
	const bytes = isUuid(photo) ? await photos.open(partsOf(app), which, 'full') : null;
	return bytes === null ? problem(404, 'There is no such photo.') : file(bytes, 'image/jpeg');
});

/** The body is the picture itself; what it is called and said to be is not looked at. */
export const PUT = siteRoute(DESK_VISIT_ROUTES.addPhoto, async (ctx) => {
	const { app, site, event, query, nowMs } = ctx;
	const me = personIdOf(ctx.reach);
	const { id = '', photo = '' } = event.params;
	if (me === null) return problem(403, 'Only a person takes photos.');
	if (!isUuid(photo)) return problem(400, 'The id of a photo is a UUID in lower case.');
	const bytes = await readBytes(event.request, PHOTO_BYTES);
	if (bytes === null) return refusalOf('too_large');
	const wanted = { siteId: site.id, visitId: Number(id), id: photo, stopId: query.stop };
	const taken = await photos.add(
		partsOf(app),
		{ ...wanted, by: query.by, me, madeAtMs: query.at, bytes },
		nowMs
	);
	return taken.ok ? ok({ verdict: taken.verdict, again: taken.again }) : refusalOf(taken.why);
});

export const DELETE = siteRoute(
	DESK_VISIT_ROUTES.dropPhoto,
	async ({ app, site, event, reach }) => {
		const { id = '', photo = '' } = event.params;
		const which = { siteId: site.id, visitId: Number(id), id: photo };
		const by = { me: personIdOf(reach) ?? 0, isAdmin: reach.role === 'admin' };
		const dropped = isUuid(photo) ? await photos.drop(partsOf(app), which, by) : 'not_there';
		if (dropped === 'not_there') return problem(404, 'There is no such photo.');
		if (dropped === 'not_yours')
			return problem(403, 'Only who took it, or an admin, takes it back.');
		return noContent();
	}
);
