import { and, eq, isNull, or, isNotNull } from 'drizzle-orm';
import type { Database } from '../connect';
import { node, outbox } from '../schema';

/** One sealed value and where it stands. */
export interface Sealed {
	column: 'keySealed' | 'keyPrevSealed' | 'payloadSealed';
	id: number;
	bytes: Buffer;
}

/** Everything sealed that must outlive a change of secret: node keys, and mail that still waits. */
export async function list(db: Database): Promise<Sealed[]> {
	const nodes = await db
		.select({ id: node.id, keySealed: node.keySealed, keyPrevSealed: node.keyPrevSealed })
		.from(node)
		.where(or(isNotNull(node.keySealed), isNotNull(node.keyPrevSealed)));
	const waiting = await db
		.select({ id: outbox.id, bytes: outbox.payloadSealed })
		.from(outbox)
		.where(and(isNull(outbox.sentAtMs), isNull(outbox.givenUpAtMs)));
	const columns = ['keySealed', 'keyPrevSealed'] as const;
	return [
		...nodes.flatMap((row) =>
			columns.flatMap((column) => {
				const bytes = row[column];
				return bytes === null ? [] : [{ column, id: row.id, bytes }];
			})
		),
		...waiting.map(({ id, bytes }) => ({ column: 'payloadSealed' as const, id, bytes }))
	];
}

/** Puts a value sealed anew in place of the former one, unless somebody changed it meanwhile. */
export async function replace(db: Database, former: Sealed, bytes: Buffer): Promise<void> {
	const { column, id } = former;
	if (column === 'payloadSealed')
		await db
			.update(outbox)
			.set({ payloadSealed: bytes })
			.where(and(eq(outbox.id, id), eq(outbox.payloadSealed, former.bytes)));
	else
		await db
			.update(node)
			.set({ [column]: bytes })
			.where(and(eq(node.id, id), eq(node[column], former.bytes)));
}
