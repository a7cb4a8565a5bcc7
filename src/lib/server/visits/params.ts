import type { VisitCause } from '$lib/schemas/visit-kinds';
import type { NoticeKind } from '$lib/schemas/notices';

const HOUR_MS = 3_600_000;

/** Limits of visits: default, range, unit and reason stand together. */
export const VISIT_PARAMS = {
	/** ms a node is left silent before somebody is asked for (1 h to 7 d): most come back by themselves. */
	silentForMs: 24 * HOUR_MS,
	/** ms a clipped bay is left (1 h to 7 d): magnets of trailers leave with them. */
	clippedForMs: 24 * HOUR_MS,
	/** ms for a second film refresh after one not cured (1 h to 7 d; method 7: twice = a visit). */
	notCuredForMs: 48 * HOUR_MS,
	/** ms after a visit in which what still shows there opens no new notice (10 min to 24 h). */
	restMs: HOUR_MS,
	/** Photos kept at one stop (1 to 50): enough to show a fault from all sides, and no album. */
	photosAStop: 12,
	/** ms after which nobody is named any more (product.md, 'Cautions': 90 days). */
	namesMs: 90 * 24 * HOUR_MS,
	/** Outlines drawn around a walk (100 to 2,000): what a phone keeps and draws without waiting. */
	outlines: 600
} as const;

/** Which notice asks for somebody, for what and after how long, ms. */
export const RULES: readonly { kind: NoticeKind; cause: VisitCause; afterMs: number }[] = [
	{ kind: 'silent', cause: 'silent', afterMs: VISIT_PARAMS.silentForMs },
	{ kind: 'clipped', cause: 'clipped', afterMs: VISIT_PARAMS.clippedForMs },
	{ kind: 'low_cell', cause: 'low_cell', afterMs: 0 },
	{ kind: 'refresh_not_cured', cause: 'not_cured', afterMs: VISIT_PARAMS.notCuredForMs }
];

/** Causes that end when their notice does; what a proof or a person said stays until somebody was there. */
export const HEAL_BY_THEMSELVES: readonly VisitCause[] = ['silent', 'clipped', 'low_cell'];
