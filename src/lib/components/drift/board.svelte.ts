import { heeded, quietly } from '$lib/components/live/polled';
import type { DriftBoard } from '$lib/schemas/desk-drift';
import { createQuery, keepPreviousData } from '@tanstack/svelte-query';

/** Hours close once an hour; what is due may turn in between. */
const EVERY_MS = 60_000;

/** The drift board of a site, and when it was last answered. */
export function boardOf(site: () => string, lineHours: () => number, wanted: () => boolean) {
	let answeredAtMs = $state<number | null>(null);
	const query = createQuery(() => ({
		queryKey: ['drift', site(), lineHours()],
		queryFn: async () =>
			await heeded<DriftBoard>(
				`/api/desk/sites/${site()}/drift?lineHours=${lineHours()}`,
				(atMs) => (answeredAtMs = atMs)
			),
		enabled: wanted(),
		placeholderData: keepPreviousData,
		refetchInterval: EVERY_MS,
		...quietly
	}));
	return {
		get board(): DriftBoard | undefined {
			return query.data;
		},
		get error(): Error | null {
			return query.error;
		},
		get answeredAtMs(): number | null {
			return answeredAtMs;
		}
	};
}
