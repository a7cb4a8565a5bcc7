import type { Node } from './state';
import type { Condition } from './types';

/** Every condition a node can be in, most serious first; one is shown, the others kept as 'also' (method 4). */
export const CONDITIONS_BY_SERIOUSNESS = [
	'withdrawn',
	'unplaced',
	'learning',
	'silent',
	'inverted',
	'clipped',
	'refresh_due',
	'drifting',
	'in_service'
] as const;
export type RankedCondition = (typeof CONDITIONS_BY_SERIOUSNESS)[number];

/** Sorts conditions from any room by seriousness, each once; in_service only when nothing else holds. */
export function rankConditions(held: Iterable<RankedCondition>): RankedCondition[] {
	const set = new Set(held);
	const ranked = CONDITIONS_BY_SERIOUSNESS.filter((c) => set.has(c) && c !== 'in_service');
	return ranked.length === 0 ? ['in_service'] : ranked;
}

/** The conditions that detection itself can see. */
export function conditionsOf(n: Node): Condition[] {
	const { slow, fast } = n;
	const held: Condition[] = [];
	if (slow.reference === null) held.push('learning');
	if (slow.signs.some((s) => s < 0)) held.push('inverted');
	if (fast.clippedRun >= 2) held.push('clipped');
	if (slow.refreshWhy !== null) held.push('refresh_due');
	return rankConditions(held) as Condition[];
}
