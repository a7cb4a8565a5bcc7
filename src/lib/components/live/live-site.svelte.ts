import { clock } from '$lib/ui/clock.svelte';
import { createQuery, useQueryClient } from '@tanstack/svelte-query';
import { ask } from './ask';
import { EMPTY, pollBays, wholeList, type BayBook } from './bay-poll';
import { changesNoted, NOTHING_CHANGED, stillRevised, type ChangedAt } from './revisions';
import { liveText, NO_ANSWER_MS, type SiteLive } from './live-words';
import { session } from './session.svelte';

const BAYS_EVERY_MS = 2_000;
const LIVE_EVERY_MS = 4_000;

/**
 * The bays and freshness of one site, polled while somebody looks. Call in a component's script; `first`
 * is what the page was loaded with.
 */
export function liveSite(
	site: () => { slug: string; timezone: string },
	first: () => { book: BayBook; asOfMs: number | null } | null
) {
	const client = useQueryClient();
	let asOfMs = $state(first()?.asOfMs ?? null);
	let answeredAtMs = $state<number | null>(null);
	let changedAt = $state.raw<ChangedAt>(NOTHING_CHANGED);

	const key = () => ['bays', site().slug];
	const heeded = async <T>(work: () => Promise<T>): Promise<T> => {
		try {
			const result = await work();
			session.answered();
			answeredAtMs = Date.now();
			return result;
		} catch (error) {
			session.heed(error);
			throw error;
		}
	};
	const bays = createQuery(() => ({
		queryKey: key(),
		queryFn: async () => {
			const before = client.getQueryData<BayBook>(key()) ?? first()?.book;
			const polled = await heeded(async () =>
				before === undefined ? await wholeList(site().slug) : await pollBays(site().slug, before)
			);
			if (polled.asOfMs !== null) asOfMs = polled.asOfMs;
			if (before !== undefined && polled.book !== before)
				changedAt = changesNoted(changedAt, before, polled.book, Date.now());
			return polled.book;
		},
		initialData: () => first()?.book,
		refetchInterval: BAYS_EVERY_MS,
		structuralSharing: false as const,
		retry: false,
		networkMode: 'always' as const
	}));
	const live = createQuery(() => ({
		queryKey: ['live', site().slug],
		queryFn: async () =>
			await heeded(async () => (await ask<SiteLive>(`/api/v1/sites/${site().slug}/live`)).body),
		refetchInterval: LIVE_EVERY_MS,
		retry: false,
		networkMode: 'always' as const
	}));

	return {
		get book(): BayBook {
			return bays.data ?? first()?.book ?? EMPTY;
		},
		get known(): boolean {
			return bays.data !== undefined;
		},
		get asOfMs(): number | null {
			return asOfMs;
		},
		get fresh(): boolean {
			return (
				!session.signedOut &&
				live.data?.status === 'live' &&
				(answeredAtMs === null || clock.nowMs - answeredAtMs <= NO_ANSWER_MS)
			);
		},
		get live(): { struck: boolean; text: string } {
			return liveText(
				live.data ?? null,
				{ signedOut: session.signedOut, answeredAtMs },
				site().timezone,
				clock.nowMs
			);
		},
		/** Codes that changed within the last minute. */
		get revised(): string[] {
			return stillRevised(changedAt, clock.nowMs);
		},
		/** Looks now instead of at the next interval (after an act). */
		async look(): Promise<void> {
			await Promise.all([bays.refetch(), live.refetch()]);
		}
	};
}
