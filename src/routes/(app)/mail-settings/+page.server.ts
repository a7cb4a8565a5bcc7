import { errorWords } from '$lib/format/messages/error';
import { mailSheetWords } from '$lib/format/messages/mail-sheets';
import { mailForm, settingsFrom } from '$lib/server/notices/settings-form';
import { saveSettings } from '$lib/server/notices/settings';
import { mayHold, recipientOf } from '$lib/server/notices/people';
import { instance } from '$lib/server/api/instance';
import { requirePage } from '$lib/server/auth/require-page';
import { personIdOf } from '$lib/server/auth/reach';
import { listed } from '$lib/server/store/queries/desk-sites';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import { error, fail } from '@sveltejs/kit';
import type { Actions, PageServerLoad } from './$types';

/** A person's own settings; nobody sees or changes another's. */
async function own(locals: App.Locals) {
	const { reach } = await requirePage(locals);
	const { pool } = instance().store;
	const all = (await mailPeople.all(pool)).map(recipientOf);
	const me = all.find(({ id }) => id === personIdOf(reach));
	if (me === undefined) error(401, errorWords().signIn);
	return { reach, me, all };
}

export const load: PageServerLoad = async ({ locals }) => {
	const { reach, me, all } = await own(locals);
	const sites = await listed(instance().store.db, reach.sites);
	return {
		settings: me.settings,
		...{ role: me.role, email: me.email, timezone: me.timezone, mailLanguage: me.language },
		mySites: sites.map(({ id, name, timezone }) => ({ id, name, timezone })),
		deputies: all
			.filter(({ id, role }) => id !== me.id && role !== 'integrator')
			.filter((person) => sites.some(({ id }) => mayHold(person, id)))
			.map(({ id, name }) => ({ id, name })),
		zones: Intl.supportedValuesOf('timeZone'),
		nowMs: Date.now()
	};
};

export const actions: Actions = {
	keep: async ({ locals, request }) => {
		const { me, all } = await own(locals);
		const form = mailForm(await request.formData());
		if (!form.success)
			return fail(400, {
				trouble: form.error.issues[0]?.message ?? mailSheetWords().settings.missing
			});
		const wanted = settingsFrom(form.data);
		const deputy = wanted.settings.deputyId;
		if (deputy !== null && !all.some(({ id }) => id === deputy && deputy !== me.id))
			return fail(400, { trouble: mailSheetWords().settings.deputyGone });
		const person = { ...me, timezone: wanted.timezone, language: wanted.language };
		await saveSettings(instance().store, person, wanted.settings, Date.now());
		return { kept: true };
	}
};
