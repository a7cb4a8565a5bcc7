import type { StopView } from '$lib/schemas/visit-view';
import type { VisitOutcome } from '$lib/schemas/visit-kinds';
import type { Waiting } from './waiting.svelte';

/** A stop as the person sees it: the server's, with what they recorded and is not sent yet over it. */
export interface ShownStop extends StopView {
	/** Closed here; the server does not know yet. */
	waitsClosed: VisitOutcome | null;
	photosWaiting: { id: string; url: string | null }[];
	notesWaiting: { id: string; text: string; madeAtMs: number }[];
	/** Something of this stop was refused. */
	unsure: boolean;
}

/** Later recordings lie over earlier ones, in the order made. What was refused changes nothing. */
export function overlay(
	stop: StopView,
	visitId: number,
	items: readonly Pick<Waiting, 'id' | 'state' | 'madeAtMs' | 'body' | 'url'>[]
): ShownStop {
	const own = items.filter(({ body }) => body?.visit === visitId && body.stop === stop.id);
	const shown: ShownStop = {
		...stop,
		...{ ticks: { ...stop.ticks }, parts: { ...stop.parts } },
		...{ waitsClosed: null, photosWaiting: [], notesWaiting: [] },
		unsure: own.some(({ state }) => state === 'refused')
	};
	for (const { id, state, madeAtMs, body, url } of own) {
		if (body === null || state === 'refused' || state === 'unreadable') continue;
		if (body.kind === 'tick') shown.ticks[body.code] = body.amount === 1;
		if (body.kind === 'part') shown.parts[body.code] = body.amount;
		if (body.kind === 'note') shown.notesWaiting.push({ id, text: body.text, madeAtMs });
		if (body.kind === 'photo') shown.photosWaiting.push({ id, url });
		if (body.kind === 'outcome' && stop.outcome === null)
			shown.waitsClosed = body.code as VisitOutcome;
	}
	return shown;
}
