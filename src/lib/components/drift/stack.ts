import { driftWords } from '$lib/format/messages/drift';
import { dot, magnitude, scale, type Vec3 } from '$lib/magnetics/vector';
import type { NodeDriftView } from '$lib/schemas/desk-drift';

type Hour = Pick<NodeDriftView['hours'][number], 'at' | 'vectors'>;

/** Parts in the order in which they are stacked: what is taken out first, what is not explained last. */
export const PARTS = [
	'temperatureMg',
	'geomagneticMg',
	'bridgeMg',
	'filmMg',
	'surroundingsMg',
	'unexplainedMg'
] as const;
export type PartKey = (typeof PARTS)[number];

export interface Stack {
	timesS: number[];
	/** Upper edges of what points along the drift, lower edges of what points against it, mG. */
	parts: { key: PartKey; label: string; above: (number | null)[]; below: (number | null)[] }[];
	totalMg: (number | null)[];
}

const HOUR_S = 3600;
/** Hours without a part in between are a gap. */
const GAP_S = 1.5 * HOUR_S;

/**
 * Parts over time as one stack. Vectors do not stack, so each is taken as far as it points along one
 * direction, that of the largest total drift shown: then the parts add up to the total exactly.
 * Null where no hour was judged.
 */
export function stackOf(hours: readonly Hour[]): Stack | null {
	const judged = hours.flatMap(({ at, vectors }) =>
		vectors === null ? [] : [{ atS: Date.parse(at) / 1000, vectors }]
	);
	if (judged.length === 0) return null;
	const along = directionOf(judged.map(({ vectors }) => vectors.totalMg));
	const stack: Stack = {
		timesS: [],
		parts: PARTS.map((key) => ({
			...{ key, label: driftWords().parts[key] },
			...{ above: [], below: [] }
		})),
		totalMg: []
	};
	let lastS: number | null = null;
	for (const { atS, vectors } of judged) {
		if (lastS !== null && atS - lastS > GAP_S) put(stack, lastS + HOUR_S, null);
		put(stack, atS, (key) => dot(vectors[key], along));
		lastS = atS;
	}
	return stack;
}

function directionOf(totals: readonly Vec3[]): Vec3 {
	const largest = totals.reduce((a, b) => (magnitude(b) > magnitude(a) ? b : a));
	const length = magnitude(largest);
	return length === 0 ? [0, 0, 1] : scale(largest, 1 / length);
}

function put(stack: Stack, atS: number, lengthOf: ((key: PartKey) => number) | null): void {
	stack.timesS.push(atS);
	let [above, below] = [0, 0];
	for (const part of stack.parts) {
		const length = lengthOf?.(part.key) ?? 0;
		if (length >= 0) above += length;
		else below += length;
		part.above.push(lengthOf === null ? null : above);
		part.below.push(lengthOf === null ? null : below);
	}
	stack.totalMg.push(lengthOf === null ? null : above + below);
}
