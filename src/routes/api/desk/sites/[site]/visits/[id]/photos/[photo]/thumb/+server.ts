import { DESK_VISIT_ROUTES } from '$lib/schemas/visits';
import { file } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { open } from '$lib/server/visits/photos';
import { isUuid } from '$lib/server/visits/refusals';

export const GET = siteRoute(DESK_VISIT_ROUTES.thumb, async ({ app, site, event }) => {
	const { id = '', photo = '' } = event.params;
	const parts = { store: app.store, dataDir: app.config.dataDir };
	const which = { siteId: site.id, visitId: Number(id), id: photo };
	const bytes = isUuid(photo) ? await open(parts, which, 'small') : null;
	return bytes === null ? problem(404, 'There is no such photo.') : file(bytes, 'image/jpeg');
});
