import type { ReadingFrame } from '$lib/wire/types';
import { noisy, QUIET, reading, TAKEN } from './ingest';

const MIN = 60_000;

/** When each of three neighbouring bays is taken, minutes after the start: [from, to]. */
export const STAYS = [
	[
		[22, 41],
		[60, 95],
		[130, 131.5],
		[200, 240]
	],
	[
		[25, 80],
		[100, 170]
	],
	[
		[30, 50],
		[132, 210]
	]
] as const;
const LENGTH_MIN = 260;

/** What node `i` sends: learning rows, then a reading a minute and a 2 Hz burst around each change. */
function story(i: number, startMs: number): ReadingFrame[] {
	const frames: ReadingFrame[] = [];
	const stays = STAYS[i]!;
	const taken = (min: number) => stays.some(([from, to]) => min >= from && min < to);
	let n = 0;
	const push = (atMs: number, rowsMs: number[]) => {
		const rows = rowsMs.map((dt) => {
			const min = (atMs + dt - startMs) / MIN;
			n += 1;
			return [dt, noisy(taken(min) ? TAKEN : QUIET, n + i)] as const;
		});
		frames.push(reading({ seq: frames.length, t: atMs, rows }));
	};
	push(
		startMs + 1_000 + i * 300,
		Array.from({ length: 60 }, (_, k) => k * 10_000)
	);
	const changes = stays.flat().map((min) => Math.round(min * MIN));
	for (let min = 12; min < LENGTH_MIN; min += 1) {
		const fromMs = min * MIN + i * 7_000;
		push(startMs + fromMs, [0]);
		for (const change of changes.filter((c) => c >= fromMs && c < fromMs + MIN))
			push(
				startMs + change + 200 + i * 30,
				Array.from({ length: 16 }, (_, k) => k * 500)
			);
	}
	return frames.sort((a, b) => a.t - b.t).map((frame, seq) => ({ ...frame, seq }));
}

export type Delivery = { i: number; frame: ReadingFrame }[];

/** What three neighbours send over four hours, in the order in which it happens. */
export const inTime = (startMs: number): Delivery =>
	[0, 1, 2]
		.flatMap((i) => story(i, startMs).map((frame) => ({ i, frame })))
		.sort((a, b) => a.frame.t - b.frame.t);

/** Swaps single messages so that some come up to `mostMs` late and some twice (seeded). */
export function disturbed(delivery: Delivery, mostMs: number, seed: number): Delivery {
	let state = seed;
	const random = () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
	return delivery
		.map((one) => ({ one, key: one.frame.t + (random() < 0.1 ? random() * mostMs : 0) }))
		.sort((a, b) => a.key - b.key)
		.flatMap(({ one }) => (random() < 0.1 ? [one, one] : [one]));
}

/** The same rows in messages of up to 120 rows, as a node sends a backlog; nodes take turns. */
export function inChunks(startMs: number): Delivery {
	const chunks: Delivery = [];
	for (const i of [0, 1, 2]) {
		// A burst may run past the next heartbeat: within a message times must rise.
		const rows = story(i, startMs)
			.flatMap((frame) =>
				frame.rows.map((row) => ({ atMs: frame.t + row.dtMs, counts: row.counts }))
			)
			.sort((a, b) => a.atMs - b.atMs);
		for (let at = 0; at < rows.length; at += 120) {
			const part = rows.slice(at, at + 120);
			const t = part[0]!.atMs;
			const list = part.map(({ atMs, counts }) => [atMs - t, counts] as const);
			chunks.push({ i, frame: reading({ seq: at / 120, t, rows: list }) });
		}
	}
	return chunks.sort((a, b) => a.frame.t - b.frame.t);
}
