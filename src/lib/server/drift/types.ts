import type { Vec3 } from '$lib/magnetics/vector';
import type { SurroundingsKind } from '$lib/drift/types';

/**
 * The contract of drift with the other rooms of the server.
 *
 * Film refreshes: every accepted pair is a row of `drift_pair`, within seconds of its arrival
 * (`settled` false: told with what drift knew at the last closed hour) and again, `settled`, when its hour is
 * closed. `store/queries/drift-pairs.ts` `since(sql, nodeIds, afterMs)` reads them; the key is (nodeId, boot, seq) of
 * `pulse`. `cause` is that of the command that the pair answered: 'calibrate' and 'diagnose' are pairs by
 * rule, 'refresh:<id>' one of yours, null nobody's order.
 * Refresh due: `refreshNeedOf` in this room gives due, reasons and words of one node.
 */
export interface AcceptedPair {
	nodeId: number;
	boot: number;
	seq: number;
	atMs: number;
	/** Cause of the command that it answered, or null. */
	cause: string | null;
	byActor: string | null;
	vacant: boolean;
	settled: boolean;
	tempC: number | null;
	/** Field and offset that it measured, mG. */
	fieldMg: Vec3;
	offsetMg: Vec3;
	/** What the film had lost, B_before - B_after, mG; null = not known. */
	filmMg: Vec3 | null;
	/** Change of what pairs explain, mG; null where the pair only gave a reference its offset. */
	bridgeChangeMg: Vec3 | null;
	/** Null in an occupied bay too. */
	surroundingsChangeMg: Vec3 | null;
	/** The largest of what it told. */
	named: { cause: 'bridge' | 'film' | SurroundingsKind; magnitudeMg: number } | null;
}
