import { fail } from '@sveltejs/kit';
import { noticesWords } from '$lib/format/messages/notices';
import { noticeAct } from '$lib/schemas/notices';
import { instance } from '$lib/server/api/instance';
import { requirePage } from '$lib/server/auth/require-page';
import { personIdOf } from '$lib/server/auth/reach';
import { act } from './acts';
import { sheetOf } from './sheet';

const ROLES = ['operator', 'maintenance', 'admin'] as const;

/** Both sheets of notices: one site's, or all within reach (`site` undefined). */
export async function loadNotices(locals: App.Locals, site: string | undefined) {
	const app = instance();
	const found = await allowed(locals, site);
	return { sheet: await sheetOf(app.store, found.reach, found.site?.id ?? null, Date.now()) };
}

async function allowed(locals: App.Locals, site: string | undefined) {
	return site === undefined
		? await requirePage(locals, { roles: ROLES })
		: await requirePage(locals, { roles: ROLES, site });
}

/** The one form of the sheet: `act`, `ids` and what the act needs. */
export async function actOnNotices(locals: App.Locals, request: Request, site: string | undefined) {
	const found = await allowed(locals, site);
	const data = await request.formData();
	const fields = { ...Object.fromEntries(data), ids: data.getAll('ids').map(String) };
	const form = noticeAct.safeParse(fields);
	if (!form.success)
		return fail(400, { trouble: form.error.issues[0]?.message ?? noticesWords().refused.missing });
	const personId = personIdOf(found.reach);
	if (personId === null) return fail(403, { trouble: noticesWords().refused.noPerson });
	const app = instance();
	const given = data.get('zone');
	const zone = typeof given === 'string' ? given : (found.site?.timezone ?? 'UTC');
	const done = await act(
		app.store,
		{
			...{ personId, act: form.data, zone: isZone(zone) ? zone : 'UTC' },
			...(found.site === null ? {} : { siteId: found.site.id })
		},
		Date.now()
	);
	if (!done.ok) return fail(422, { trouble: done.why });
	app.nudgeNotices();
	return { done: done.done, left: done.left };
}

function isZone(zone: string): boolean {
	try {
		new Intl.DateTimeFormat('en-GB', { timeZone: zone });
		return true;
	} catch {
		return false;
	}
}
