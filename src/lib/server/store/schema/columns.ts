import { bigint, customType } from 'drizzle-orm/mysql-core';

/** An instant as UTC milliseconds since the Unix epoch (BIGINT read as number). */
export const atMs = (name: string) => bigint(name, { mode: 'number' });

/** Raw bytes of at most `length`. */
export const bytes = customType<{ data: Buffer; config: { length: number } }>({
	dataType: (config) => `varbinary(${config?.length ?? 255})`
});

/** Raw bytes of fixed `length`. */
export const fixedBytes = customType<{ data: Buffer; config: { length: number } }>({
	dataType: (config) => `binary(${config?.length ?? 32})`
});

/** Signed three-byte integer: axis counts of an 18-bit part fit with room to spare. */
export const counts24 = customType<{ data: number }>({ dataType: () => 'mediumint' });

/** Bytes without a tight bound (sealed answers, sealed mail). */
export const blob = customType<{ data: Buffer }>({ dataType: () => 'mediumblob' });
