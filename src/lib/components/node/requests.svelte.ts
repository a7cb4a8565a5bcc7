import { ask } from '$lib/components/live/ask';
import { session } from '$lib/components/live/session.svelte';
import { createQuery } from '@tanstack/svelte-query';
import { holdersByBay, requestsByBay, type OpenRequest } from './open-request';

const EVERY_MS = 10_000;

/** Open requests of a site, polled; `holders` says by bay who has it. */
export function openRequests(site: () => string) {
	const query = createQuery(() => ({
		queryKey: ['requests', site()],
		queryFn: async () => {
			try {
				const { body } = await ask<{ items: OpenRequest[] }>(`/api/desk/sites/${site()}/requests`);
				return body.items;
			} catch (error) {
				session.heed(error);
				throw error;
			}
		},
		refetchInterval: EVERY_MS,
		retry: false,
		networkMode: 'always' as const
	}));
	const byBay = $derived(requestsByBay(query.data ?? []));
	const holders = $derived(holdersByBay(query.data ?? []));
	return {
		get all(): readonly OpenRequest[] {
			return query.data ?? [];
		},
		get byBay(): ReadonlyMap<string, OpenRequest> {
			return byBay;
		},
		get holders(): ReadonlyMap<string, { name: string; initials: string }> {
			return holders;
		},
		async look(): Promise<void> {
			await query.refetch();
		}
	};
}
