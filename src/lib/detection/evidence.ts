import type { Evidence } from './types';
import type { Node, Step } from './state';
import { size3 } from './vec';

/** Figures as people read them in a sentence: whole mG, whole seconds. */
const mg = (value: number): string => `${Math.round(value).toString()} mG`;
const MINUTE_S = 60;
const HOUR_S = 3600;

export function spanWords(s: number): string {
	if (s < 2 * MINUTE_S) return `${Math.round(s).toString()} s`;
	if (s < 2 * HOUR_S) return `${Math.round(s / MINUTE_S).toString()} min`;
	return `${Math.round(s / HOUR_S).toString()} h`;
}

/** How a node is named until the caller puts its bay's code there. */
export const named = (nodeId: number): string => `{node:${nodeId.toString()}}`;

export const disturbanceWords = (dMg: number, limitMg: number): string =>
	`disturbance ${mg(dMg)}, threshold ${mg(limitMg)}`;

export function stepWords(step: Step, verb: 'rose' | 'fell' | 'moved'): string {
	const size = mg(size3(step.j));
	if (step.gapS > 0) return `${verb} ${size} during a gap of ${spanWords(step.gapS)}`;
	const within = Math.max(1, step.riseS);
	return `${verb} ${size} in ${spanWords(within)}`;
}

/** More is not read, and stored state has a limit. */
const MOST_NAMED = 2;

const largest = <T extends { step: Step }>(overlapping: readonly T[]): T[] =>
	[...overlapping].sort((a, b) => size3(b.step.j) - size3(a.step.j)).slice(0, MOST_NAMED);

/** 'neighbour B07 quiet', or what it did. */
export function neighbourWords(
	n: Node,
	overlapping: readonly { node: Node; step: Step }[]
): string[] {
	if (n.near.length === 0) return [];
	const moved = largest(overlapping).map(
		({ node, step }) => `neighbour ${named(node.id)} moved ${mg(size3(step.j))} at the same time`
	);
	const quiet = n.near.filter((m) => overlapping.every((o) => o.node !== m));
	return [
		...moved,
		...quiet
			.slice(0, 2)
			.map((m) => `neighbour ${named(m.id)} ${m.fast.open === 1 ? 'moving' : 'quiet'}`)
	];
}

export const evidence = (because: string[], against: string[] = []): Evidence => ({
	because,
	against
});
