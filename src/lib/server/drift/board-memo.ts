import type { DriftSettings } from '$lib/drift/params';
import type { DriftRow } from '$lib/schemas/desk-drift';
import type { MarkedRow } from '$lib/server/store/queries/drift-view';

interface Kept {
	key: string;
	row: DriftRow;
}

/** Rows kept at the most, some 2 kB each: more nodes than one machine is meant for. */
const MOST = 50_000;

/**
 * Rows of the Drift board as they were last worked out. What a node remembers changes once an hour, while a board
 * that lies open asks every minute: rates and their limits are not worked out anew for that. A row is kept under
 * everything it depends on (what is shown of the bay, a checksum of the memory, the settings).
 */
export class BoardMemo {
	readonly #kept = new Map<number, Kept>();

	rowOf(row: MarkedRow, settingsKey: string): DriftRow | null {
		const kept = this.#kept.get(row.nodeId);
		return kept?.key === keyOf(row, settingsKey) ? kept.row : null;
	}

	keep(row: MarkedRow, settingsKey: string, made: DriftRow): void {
		if (this.#kept.size >= MOST && !this.#kept.has(row.nodeId)) this.#kept.clear();
		this.#kept.set(row.nodeId, { key: keyOf(row, settingsKey), row: made });
	}
}

const keyOf = (
	{ memoryMark, serial, bay, zone, headingDeg, condition, also, changedAtMs }: MarkedRow,
	settingsKey: string
): string =>
	JSON.stringify([
		...[serial, bay, zone, headingDeg, condition, also, changedAtMs],
		...[memoryMark, settingsKey]
	]);

/** Settings as a key; those of the site itself are many nodes' and are written once. */
export function settingsKeys(site: DriftSettings): (own: DriftSettings) => string {
	const whole = JSON.stringify(site);
	return (own) => (own === site ? whole : JSON.stringify(own));
}
