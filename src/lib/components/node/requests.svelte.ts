import { heeded, quietly } from '$lib/components/live/polled';
import { createQuery } from '@tanstack/svelte-query';
import { holdersByBay, requestsByBay, type OpenRequest } from './open-request';

const EVERY_MS = 10_000;

/** Open requests of a site, polled; `holders` says by bay who has it. */
export function openRequests(site: () => string) {
	const query = createQuery(() => ({
		queryKey: ['requests', site()],
		queryFn: async () =>
			(await heeded<{ items: OpenRequest[] }>(`/api/desk/sites/${site()}/requests`)).items,
		refetchInterval: EVERY_MS,
		...quietly
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
