import { run, select, type Sql } from './bulk';

/** A stretch of time in which the server could hear nodes. */
export interface Stretch {
	fromMs: number;
	toMs: number;
}

/** Stretches that end after `sinceMs`, rising. */
export async function since(sql: Sql, sinceMs: number): Promise<Stretch[]> {
	return await select(
		sql,
		'SELECT from_ms AS fromMs, to_ms AS toMs FROM hearing WHERE to_ms > ? ORDER BY from_ms',
		[sinceMs]
	);
}

/** Begins or lengthens the stretch that begins at `fromMs`. */
export async function extend(sql: Sql, stretch: Stretch): Promise<void> {
	await run(
		sql,
		'INSERT INTO hearing (from_ms, to_ms) VALUES (?, ?) ON DUPLICATE KEY UPDATE to_ms = GREATEST(to_ms, VALUES(to_ms))',
		[stretch.fromMs, stretch.toMs]
	);
}

/** How much of [fromMs, toMs) lies inside the stretches, which rise and do not overlap. */
export function heardMs(stretches: readonly Stretch[], fromMs: number, toMs: number): number {
	let sum = 0;
	for (let i = stretches.length - 1; i >= 0; i -= 1) {
		const s = stretches[i] as Stretch;
		if (s.toMs <= fromMs) break;
		sum += Math.max(0, Math.min(s.toMs, toMs) - Math.max(s.fromMs, fromMs));
	}
	return sum;
}
