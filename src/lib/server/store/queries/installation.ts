import { eq } from 'drizzle-orm';
import type { Database } from '../connect';
import { installation } from '../schema';

/** A single value of the installation, or null. */
export async function read(db: Database, name: string): Promise<Buffer | null> {
	const [row] = await db
		.select({ value: installation.value })
		.from(installation)
		.where(eq(installation.name, name));
	return row?.value ?? null;
}

/** Writes a value once: whoever comes second gets what the first one wrote. */
export async function readOrWrite(db: Database, name: string, value: Buffer): Promise<Buffer> {
	await db.insert(installation).values({ name, value }).onDuplicateKeyUpdate({ set: { name } });
	return (await read(db, name)) ?? value;
}

export async function overwrite(db: Database, name: string, value: Buffer): Promise<void> {
	await db.insert(installation).values({ name, value }).onDuplicateKeyUpdate({ set: { value } });
}

export async function remove(db: Database, name: string): Promise<void> {
	await db.delete(installation).where(eq(installation.name, name));
}
