import type { BayItem } from '$lib/components/plan/types';
import type { SiteLive } from '$lib/components/live/live-words';

/** One site of a wall link as of now; `bays` is null when nothing changed. */
export interface WallNow {
	slug: string;
	changes: number;
	live: SiteLive;
	bays: BayItem[] | null;
	holders: Record<string, string>;
}
