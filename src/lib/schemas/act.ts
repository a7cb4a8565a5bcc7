import { z } from 'zod';

/** What stands as JSON text in `act.args`, by kind. Written by routes, read by the pipeline. */
export const actArgs = {
	/** `bay_id` of the row is the bay; a node that had another bay leaves it. */
	place: z.strictObject({ preCommissioned: z.boolean() }),
	/** true: a person says they see the bay empty now; false: accepted by rule, provisional. */
	accept: z.strictObject({ seenEmpty: z.boolean() }),
	withdraw: z.strictObject({}),
	settle: z.strictObject({ as: z.enum(['seen_vacant', 'told_vacant', 'seen_occupied']) }),
	undo_settle: z.strictObject({ settleActId: z.int() }),
	/** One act a bay; `at_ms` of the row is when it begins. The `closure` row is already there. */
	close: z.strictObject({ closureId: z.int(), toMs: z.int(), reason: z.string() }),
	lift: z.strictObject({ closureId: z.int() }),
	/**
	 * The node itself changed: read it again. With ids of `parameter` rows: a setting that holds from the
	 * batch that takes this, and the one that ends with it; then `node_id` may be null (the whole site).
	 */
	parameters: z.strictObject({ began: z.int().optional(), ended: z.int().optional() }),
	accept_boot: z.strictObject({ boot: z.int().nonnegative() }),
	/** Ask the node for a reading and a report now. */
	ask: z.strictObject({})
} as const;

export type ActKind = keyof typeof actArgs;
export type ActArgs<K extends ActKind> = z.infer<(typeof actArgs)[K]>;

export const settleAs = actArgs.settle.shape.as;
