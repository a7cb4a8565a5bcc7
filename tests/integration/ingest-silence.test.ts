import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { HearingWatch } from '$lib/server/ingest/hearing-watch';
import { lookForSilence } from '$lib/server/ingest/silence';
import { noisy, QUIET, reading, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const MIN = 60_000;
const GRACE_MS = 15 * MIN;
const run = new IngestRun();
let node: TestNode;
let next = 0;
let watch: HearingWatch;
let seq = 0;
/** The server's clock of this test, ms after now. */
let aheadMs = 0;

beforeAll(async () => {
	await run.begin({ nodes: 8, graceS: GRACE_MS / 1000 });
});
afterAll(async () => await run.end());
beforeEach(async () => {
	node = run.node(next++);
	seq = 0;
	aheadMs = 0;
	await run.rows('DELETE FROM hearing');
	watch = new HearingWatch();
	const startMs = Date.now() - 40 * MIN;
	await run.acts([[node, 'place', { preCommissioned: true }, startMs]]);
	await send(startMs + 1_000, 60);
});

async function send(fromMs: number, rows: number, stepMs = 10_000): Promise<void> {
	const list = Array.from({ length: rows }, (_, i) => [i * stepMs, noisy(QUIET, i)] as const);
	await run.send(node, reading({ seq: seq++, t: fromMs, rows: list }));
}

/** The server hears for so long, and looks. */
async function hear(ms: number): Promise<void> {
	for (const endMs = aheadMs + ms; aheadMs < endMs; aheadMs += 15_000)
		await watch.hears(run.store.pool, Date.now() + aheadMs);
	await watch.hears(run.store.pool, Date.now() + aheadMs);
	await lookForSilence(run.pipeline, watch, Date.now() + aheadMs);
}

const shown = async () =>
	(
		await run.rows<Record<string, unknown>>(
			'SELECT state, `condition`, last_known_state AS lastKnown, last_known_at_ms AS lastKnownAtMs FROM bay_state WHERE bay_id = ?',
			[node.bayId]
		)
	)[0];
const lastRowMs = () => run.pipeline.room.registry.byId(node.id)!.live.pointer!.atMs;

test('not silent at 4 min, silent at 6: three periods, five minutes at the least', async () => {
	await hear(4 * MIN);
	expect(await shown()).toMatchObject({ state: 'vacant', condition: 'in_service' });
	await hear(2 * MIN);
	expect(await shown()).toMatchObject({ state: 'vacant', condition: 'silent' });
});

test('after the grace time the state is not known, and what it last was is kept', async () => {
	await hear(14 * MIN);
	expect(await shown()).toMatchObject({ state: 'vacant', condition: 'silent' });
	await hear(2 * MIN);
	expect(await shown()).toEqual({
		state: 'unknown',
		condition: 'silent',
		lastKnown: 'vacant',
		lastKnownAtMs: lastRowMs()
	});
	expect((await run.feed(node.bayId)).at(-1)).toMatchObject({
		type: 'unknown',
		atMs: lastRowMs() + GRACE_MS
	});
	// History knows of silence only by the rows that follow (method, 'History and feed').
	expect((await run.history(node.bayId)).map(({ type }) => type)).toEqual(['known']);
});

test('time in which the server could not hear does not count', async () => {
	await hear(4 * MIN);
	watch.deaf();
	aheadMs += 60 * MIN;
	await hear(30_000);
	expect(await shown()).toMatchObject({ state: 'vacant', condition: 'in_service' });
	await hear(2 * MIN);
	expect(await shown()).toMatchObject({ condition: 'silent' });
});

test('heard again after a true gap: the unknown stands, known follows, both are in history', async () => {
	await hear(20 * MIN);
	const gapMs = lastRowMs() + GRACE_MS;
	await send(lastRowMs() + 18 * MIN, 1);
	expect(await shown()).toMatchObject({ state: 'vacant', condition: 'in_service' });
	const feed = await run.feed(node.bayId);
	expect(feed.map(({ type }) => type)).toEqual(['known', 'unknown', 'known']);
	const history = await run.history(node.bayId);
	expect(history.map(({ type, atMs }) => [type, atMs]).slice(0, 2)).toEqual([
		['known', history[0]!.atMs],
		['unknown', gapMs]
	]);
	const linked = await run.rows<{ n: number }>(
		'SELECT COUNT(*) AS n FROM history h JOIN event e ON e.id = h.event_id AND e.type = h.type AND e.bay_id = h.bay_id WHERE h.bay_id = ?',
		[node.bayId]
	);
	expect(linked[0]?.n).toBe(3);
});

test('heard again with its readings kept: the unknown did not happen and is voided', async () => {
	await hear(20 * MIN);
	expect(await shown()).toMatchObject({ state: 'unknown' });
	await send(lastRowMs() + MIN, 18, MIN / 2);
	expect(await shown()).toMatchObject({
		state: 'vacant',
		condition: 'in_service',
		lastKnown: null
	});
	expect((await run.feed(node.bayId)).map(({ type }) => type)).toEqual(['known']);
	expect((await run.history(node.bayId)).map(({ type }) => type)).toEqual(['known']);
	const [voided] = await run.rows("SELECT late FROM event WHERE bay_id = ? AND type = 'voided'", [
		node.bayId
	]);
	expect(voided).toEqual({ late: 1 });
});

test('a silence that was told is known after a restart, and told once', async () => {
	await hear(20 * MIN);
	await run.pipeline.close();
	await run.subscriber.close();
	await run.beginPipeline();
	await lookForSilence(run.pipeline, watch, Date.now() + aheadMs);
	expect((await run.feed(node.bayId)).map(({ type }) => type)).toEqual(['known', 'unknown']);
	await send(lastRowMs() + MIN, 18, MIN / 2);
	expect((await run.feed(node.bayId)).map(({ type }) => type)).toEqual(['known']);
});
