import { peopleWords } from '$lib/format/messages/people';
import { ROLES } from '$lib/schemas/roles';
import { instance } from '$lib/server/api/instance';
import { invite, inviteAgain } from '$lib/server/auth/invite';
import { requireRole } from '$lib/server/auth/page-guard';
import { personIdOf } from '$lib/server/auth/reach';
import * as audit from '$lib/server/store/queries/audit';
import { listed } from '$lib/server/store/queries/desk-sites';
import * as people from '$lib/server/store/queries/people';
import { fail, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
	const reach = requireRole(locals, ['admin']);
	const { db } = instance().store;
	const [all, sites] = await Promise.all([people.list(db), listed(db, 'all')]);
	return { people: all, allSites: sites, me: personIdOf(reach), nowMs: Date.now() };
};

const say = () => peopleWords().trouble;
const sites = z.union([
	z.literal('all'),
	z.array(z.coerce.number().int().positive()).min(1, { error: () => say().sites })
]);
const reachForm = z.object({ role: z.enum(ROLES), sites });
const inviteForm = reachForm.extend({
	email: z.email({ error: () => say().email }).max(254),
	name: z
		.string()
		.trim()
		.min(1, { error: () => say().name })
		.max(120),
	initials: z
		.string()
		.trim()
		.regex(/^\p{L}{1,4}$/u, { error: () => say().initials })
});

async function read(event: RequestEvent) {
	const by = requireRole(event.locals, ['admin']);
	const data = await event.request.formData();
	const fields = {
		...Object.fromEntries(data),
		sites: data.get('all') === 'on' ? 'all' : data.getAll('site').map(String)
	};
	return { by, fields, id: Number(data.get('id')), me: personIdOf(by) };
}
const trouble = (text: string, form: string) => fail(400, { trouble: text, form });
const issue = (error: z.ZodError) => error.issues[0]?.message ?? say().missing;

/** A change of somebody's reach, noted in the audit trail; whoever does it cannot shut himself out. */
async function change(
	event: RequestEvent,
	what: string,
	work: (db: people.Db, id: number) => Promise<void>
) {
	const { by, id, me } = await read(event);
	if (id === me) return trouble(say().own, 'person');
	const app = instance();
	await app.store.db.transaction(async (tx) => {
		const person = await people.byId(tx, id);
		if (person === null) return;
		await work(tx, id);
		await audit.note(tx, { actor: by.actor, what, subject: person.email }, Date.now());
	});
	app.directory.invalidate();
	return { done: true };
}

export const actions: Actions = {
	invite: async (event) => {
		const { by, fields } = await read(event);
		const form = inviteForm.safeParse(fields);
		if (!form.success) return trouble(issue(form.error), 'invite');
		const made = await invite({ actor: by.actor, name: by.name }, form.data);
		if (!made.ok) return trouble(say().here, 'invite');
		return { done: true, invited: form.data.email };
	},
	again: async (event) => {
		const { by, id } = await read(event);
		const sent = await inviteAgain({ actor: by.actor, name: by.name }, id);
		return sent ? { done: true } : trouble(say().takenUp, 'person');
	},
	reach: async (event) => {
		const { by, fields, id, me } = await read(event);
		const form = reachForm.safeParse(fields);
		if (!form.success) return trouble(issue(form.error), 'person');
		if (id === me) return trouble(say().own, 'person');
		const app = instance();
		await app.store.db.transaction(async (tx) => {
			await people.setReach(tx, id, form.data);
			const subject = (await people.byId(tx, id))?.email ?? String(id);
			await audit.note(
				tx,
				{ actor: by.actor, what: 'person.reach_changed', subject, detail: form.data },
				Date.now()
			);
		});
		app.directory.invalidate();
		return { done: true };
	},
	off: async (event) =>
		await change(event, 'person.switched_off', async (db, id) => {
			await people.switchOff(db, id, Date.now());
		}),
	on: async (event) =>
		await change(event, 'person.switched_on', async (db, id) => {
			await people.switchOn(db, id);
		})
};
