import { send } from '$lib/components/live/ask';
import { heeded, quietly } from '$lib/components/live/polled';
import { session } from '$lib/components/live/session.svelte';
import { words } from '$lib/format/messages';
import { parametersWords } from '$lib/format/messages/parameters';
import { marginNotes } from '$lib/ui/margin-notes.svelte';
import type { ParameterChange, ParameterSheet } from '$lib/schemas/desk-parameters';
import { createQuery } from '@tanstack/svelte-query';
import { parameterLabel } from './parameter-words';

const EVERY_MS = 30_000;

/** Settings of a site, or as one node of it has them, and when they were last answered. */
export function parametersOf(site: () => string, node: () => string | null) {
	let answeredAtMs = $state<number | null>(null);
	const path = () => `/api/desk/sites/${site()}/parameters`;
	const query = createQuery(() => ({
		queryKey: ['parameters', site(), node()],
		queryFn: async () => {
			const serial = node();
			return await heeded<ParameterSheet>(
				path() + (serial === null ? '' : `?node=${encodeURIComponent(serial)}`),
				(atMs) => (answeredAtMs = atMs)
			);
		},
		refetchInterval: EVERY_MS,
		...quietly
	}));
	return {
		get sheet(): ParameterSheet | undefined {
			return query.data;
		},
		get error(): Error | null {
			return query.error;
		},
		get answeredAtMs(): number | null {
			return answeredAtMs;
		},
		look: async () => void (await query.refetch()),
		/** What stood before the change stands again. */
		undo: async (change: ParameterChange): Promise<void> => {
			try {
				await send('POST', `${path()}/${change.id}/undo`, {});
				marginNotes.add(parametersWords().undone(parameterLabel(change.name)));
			} catch (error) {
				session.heed(error);
				marginNotes.add(error instanceof Error ? error.message : words().signIn.failed, {
					trouble: true
				});
			}
			await query.refetch();
		}
	};
}
