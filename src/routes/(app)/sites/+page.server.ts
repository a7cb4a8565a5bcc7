import { sitesWords } from '$lib/format/messages/sites';
import { instance } from '$lib/server/api/instance';
import { requireRole } from '$lib/server/auth/page-guard';
import * as audit from '$lib/server/store/queries/audit';
import * as demo from '$lib/server/store/queries/demo';
import { transaction } from '$lib/server/store/transaction';
import { fail } from '@sveltejs/kit';
import type { Actions } from './$types';

export const actions: Actions = {
	/** The demo leaves in one step: sites, nodes, people, keys. Its simulator ends by itself. */
	leaveDemo: async ({ locals }) => {
		const { actor, sites } = requireRole(locals, ['admin']);
		if (sites !== 'all') return fail(403, { trouble: sitesWords().needsAdmin });
		const app = instance();
		const nowMs = Date.now();
		const left = await transaction(app.store, async (tx) => {
			const slugs = await demo.leave(tx, actor, nowMs);
			for (const subject of slugs)
				await audit.note(tx.db, { actor, what: 'demo.left', subject }, nowMs);
			return slugs;
		});
		app.directory.invalidate();
		app.nudge();
		return { left: left.length };
	}
};
