import { extendTo, type DemoWorld } from './demo-world';
import { advanceMember, sentNow, type Member } from './fleet';
import type { Stay } from './truth';

/** Rows of about this long go into one message of at most 120 rows. */
const CHUNK_MS = 75 * 60_000;
/** Whole chunks on the way at most: the pipeline gets work while we make more, the broker's ceiling stays far. */
const CHUNKS_AHEAD = 3;
/** When no more than this is missing, the rest is lived in real time. */
const NEAR_MS = 2000;

/**
 * Sends everything from where the nodes stand up to now, in chunks of time over all nodes, so that
 * neighbours arrive together. Returns the rows sent.
 */
export async function playHistory(
	demo: DemoWorld,
	members: readonly Member[],
	stop: AbortSignal,
	onStays: (stays: Stay[], upToMs: number) => void,
	onProgress: (atMs: number, rows: number) => void
): Promise<number> {
	let rows = 0;
	const alive = members.filter(({ node, silentFromMs }) => node.atMs < silentFromMs - CHUNK_MS);
	let atMs = Math.min(Date.now(), ...alive.map(({ node }) => node.atMs));
	const onTheWay: Promise<void[]>[] = [];
	while (!stop.aborted && Date.now() - atMs > NEAR_MS) {
		atMs = Math.min(Date.now(), atMs + CHUNK_MS);
		onStays(extendTo(demo, atMs + CHUNK_MS), atMs);
		const sends = members.flatMap((member) =>
			advanceMember(member, atMs, 'history').map(async (sent) => {
				if (sent.frame.kind === 'reading') rows += sent.frame.rows.length;
				await member.client.send(sentNow(sent, Date.now()));
			})
		);
		onTheWay.push(Promise.all(sends));
		if (onTheWay.length >= CHUNKS_AHEAD) await onTheWay.shift();
		onProgress(atMs, rows);
	}
	await Promise.all(onTheWay);
	return rows;
}
