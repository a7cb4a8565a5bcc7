import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { endClosures } from '$lib/server/ingest/closure-ends';
import { noisy, QUIET, reading, TAKEN, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const MIN = 60_000;
const run = new IngestRun();
let node: TestNode;
let next = 0;
const seqs = new Map<number, number>();

beforeAll(async () => {
	await run.begin({ nodes: 17 });
});
afterAll(async () => await run.end());
beforeEach(() => (node = run.node(next++)));

/** Rows a second apart; returns the time after the last. */
async function send(
	fromMs: number,
	counts: readonly [number, number, number],
	rows: number,
	stepMs = 10_000
): Promise<number> {
	const seq = seqs.get(node.id) ?? 0;
	seqs.set(node.id, seq + 1);
	await run.send(
		node,
		reading({
			seq,
			t: fromMs,
			rows: Array.from({ length: rows }, (_, i) => [i * stepMs, noisy(counts, i)] as const)
		})
	);
	return fromMs + rows * stepMs;
}

/** In service since `agoMin` minutes, its quiet field learned from the first ten. */
async function inService(agoMin = 60): Promise<number> {
	const startMs = Date.now() - agoMin * MIN;
	expect(await run.acts([[node, 'place', { preCommissioned: true }, startMs]])).toEqual(['done']);
	return await send(startMs + 1_000, QUIET, 60);
}

const shown = async () =>
	(
		await run.rows<Record<string, unknown>>(
			`SELECT state, confidence_20 AS c, doubt_reason AS doubt, \`condition\`, also, node_id AS nodeId,
				last_known_state AS lastKnown, change_id AS changeId FROM bay_state WHERE bay_id = ?`,
			[node.bayId]
		)
	)[0];

test('place: the rows stored since the given time are taken in, and the reference is kept', async () => {
	const startMs = Date.now() - 30 * MIN;
	await send(startMs + 1_000, QUIET, 60);
	expect(await shown()).toBeUndefined();
	expect(await run.acts([[node, 'place', { preCommissioned: true }, startMs]])).toEqual(['done']);
	await waitFor(async () => (await shown())?.['state'] === 'vacant');
	const refs = await run.rows(
		'SELECT provisional, superseded_at_ms AS s FROM reference WHERE node_id = ?',
		[node.id]
	);
	expect(refs).toEqual([{ provisional: 1, s: null }]);
});

test('what a node measured before it was placed says nothing of the bay, also when it comes afterwards', async () => {
	const startMs = Date.now() - 30 * MIN;
	await run.acts([[node, 'place', { preCommissioned: true }, startMs]]);
	await send(startMs - 10 * MIN, QUIET, 60);
	expect(await shown()).not.toMatchObject({ state: 'vacant' });
	await send(startMs + 1_000, TAKEN, 60);
	// Learned on the field of the bay, not on that of the box it came in.
	const [learned] = await run.rows<{ x: number }>(
		'SELECT x_mg AS x FROM reference WHERE node_id = ?',
		[node.id]
	);
	expect(learned?.x).toBeCloseTo(TAKEN[0] / 16.384, 0);
});

test('place on a bay that another node holds is refused by name', async () => {
	await inService();
	const other = run.node(16);
	const taken = { ...other, bayId: node.bayId };
	expect(await run.acts([[taken, 'place', { preCommissioned: false }, Date.now()]])).toEqual([
		`the bay holds node ${node.serial}: withdraw it first`
	]);
});

test('accept: learned but not yet believed until somebody sees the bay empty', async () => {
	const startMs = Date.now() - 30 * MIN;
	await run.acts([[node, 'place', { preCommissioned: false }, startMs]]);
	const atMs = await send(startMs + 1_000, QUIET, 60);
	expect(await shown()).toMatchObject({ state: 'unknown', condition: 'learning' });
	expect(await run.acts([[node, 'accept', { seenEmpty: true }, atMs]])).toEqual(['done']);
	expect(await shown()).toMatchObject({ state: 'vacant', condition: 'in_service' });
	const refs = await run.rows(
		'SELECT provisional, accepted_by AS who FROM reference WHERE node_id = ?',
		[node.id]
	);
	expect(refs).toEqual([{ provisional: 0, who: 'person:1' }]);
});

test('an act that detection refuses says why', async () => {
	await run.acts([[node, 'place', { preCommissioned: false }, Date.now() - MIN]]);
	const [outcome] = await run.acts([[node, 'accept', { seenEmpty: true }, Date.now()]]);
	expect(outcome).not.toBe('done');
	expect(outcome!.length).toBeGreaterThan(5);
});

test('settle and undo within a day: the feed tells both, history keeps neither', async () => {
	let atMs = await inService();
	atMs = await send(atMs + MIN, TAKEN, 20);
	expect((await shown())?.['state']).toBe('occupied');
	const [id] = await actIds([[node, 'settle', { as: 'seen_vacant' }, atMs + 1_000]]);
	expect((await shown())?.['state']).toBe('vacant');
	expect((await run.feed(node.bayId)).at(-1)).toMatchObject({ type: 'settled', state: 'vacant' });
	await actIds([[node, 'undo_settle', { settleActId: id }, atMs + 2_000]]);
	expect((await shown())?.['state']).toBe('occupied');
	expect((await run.feed(node.bayId)).map(({ type }) => type)).toEqual(['known', 'arrival']);
	expect((await run.history(node.bayId)).map(({ type }) => type)).toEqual(['known', 'arrival']);
	const voided = await run.rows<{ state: string }>(
		"SELECT state FROM event WHERE bay_id = ? AND type = 'voided'",
		[node.bayId]
	);
	// The voiding event says what the bay is without what it voids.
	expect(voided).toEqual([{ state: 'occupied' }]);
});

test('an act in the past goes in at its own time: what was seen then bends what came after', async () => {
	let atMs = await inService();
	const seenMs = atMs + 30_000;
	atMs = await send(atMs + MIN, QUIET, 12);
	await send(atMs + MIN, TAKEN, 20);
	expect(await run.acts([[node, 'settle', { as: 'seen_occupied' }, seenMs]])).toEqual(['done']);
	const history = await run.history(node.bayId);
	expect(history.find(({ type }) => type === 'settled')?.atMs).toBe(seenMs);
	const times = history.map(({ atMs: at }) => at);
	expect(times).toEqual([...times].sort((a, b) => a - b));
});

test('withdraw: the bay is without a node, later messages are refused, the broker is told', async () => {
	const atMs = await inService();
	expect(await run.acts([[node, 'withdraw', {}, atMs + 1_000]])).toEqual(['done']);
	expect(await shown()).toMatchObject({
		state: 'unknown',
		condition: 'withdrawn',
		nodeId: null,
		lastKnown: 'vacant'
	});
	expect((await run.feed(node.bayId)).at(-1)).toMatchObject({ type: 'unknown' });
	await send(atMs + MIN, QUIET, 1);
	const [kept] = await run.rows('SELECT reason FROM rejected WHERE node_id = ?', [node.id]);
	expect(kept).toEqual({ reason: 'withdrawn' });
	const { removed } = run.pipeline.room.registry.directoryChanges(Date.now());
	expect(removed).not.toContain(run.node(0).serial);
	const known = run.pipeline.room.registry.directory(Date.now()).map(({ serial }) => serial);
	expect(known).not.toContain(node.serial);
});

test('close and its end: readers are told of both, and the check at the end is written down', async () => {
	let atMs = await inService(120);
	const [from, to] = [atMs + MIN, atMs + 10 * MIN];
	await run.rows(
		"INSERT INTO closure (site_id, bay_id, from_ms, to_ms, reason, act_id) VALUES (?, ?, ?, ?, 'market', 0)",
		[run.site.siteId, node.bayId, from, to]
	);
	const [closure] = await run.rows<{ id: number }>('SELECT id FROM closure WHERE bay_id = ?', [
		node.bayId
	]);
	const before = await lastChange();
	const args = { closureId: closure!.id, toMs: to, reason: 'market' };
	expect(await run.acts([[node, 'close', args, from]])).toEqual(['done']);
	atMs = await send(from + MIN, QUIET, 30);
	atMs = await send(to + MIN, QUIET, 30);
	await endClosures(run.pipeline, Date.now());
	const [row] = await run.rows(
		'SELECT stage, end_finding AS finding FROM closure WHERE bay_id = ?',
		[node.bayId]
	);
	expect(row).toEqual({ stage: 2, finding: 'as before' });
	const kinds = await run.rows<{ kind: string }>(
		'SELECT kind FROM `change` WHERE id > ? AND bay_id = ?',
		[before, node.bayId]
	);
	expect(kinds.filter(({ kind }) => kind === 'closure')).toHaveLength(2);
});

test('an act for a bay without a node: a closure holds, anything else has nothing to act on', async () => {
	await run.rows(
		"INSERT INTO closure (site_id, bay_id, from_ms, to_ms, reason, act_id) VALUES (?, ?, 1, ?, 'works', 0)",
		[run.site.siteId, node.bayId, Date.now() + MIN]
	);
	const [closure] = await run.rows<{ id: number }>('SELECT id FROM closure WHERE bay_id = ?', [
		node.bayId
	]);
	const bare = { ...node, id: null as unknown as number };
	const args = { closureId: closure!.id, toMs: Date.now() + MIN, reason: 'works' };
	expect(await run.acts([[bare, 'close', args, Date.now()]])).toEqual(['done']);
	expect(await run.acts([[bare, 'settle', { as: 'seen_vacant' }, Date.now()]])).toEqual([
		'the bay has no node'
	]);
});

test('parameters: an override reaches detection with the next row', async () => {
	const atMs = await inService();
	const before = run.pipeline.viewOf(node.id)!.onMg;
	await run.rows(
		"INSERT INTO parameter (site_id, node_id, name, value, from_ms, by_actor, why) VALUES (?, ?, 'onMg', '90', 0, 'person:1', 'trucks')",
		[run.site.siteId, node.id]
	);
	expect(await run.acts([[node, 'parameters', {}, atMs]])).toEqual(['done']);
	await send(atMs + MIN, QUIET, 2);
	expect(run.pipeline.viewOf(node.id)!.onMg).toBeGreaterThan(before);
});

test('parameters: a site’s setting holds from the batch that takes it; what came before is judged by what held then', async () => {
	const atMs = await inService();
	const onMg = () => run.pipeline.viewOf(node.id)!.onMg;
	const before = onMg();
	const [{ id: began } = { id: 0 }] = await run.rows<{ id: number }>(
		"INSERT INTO parameter (site_id, name, value, from_ms, by_actor, why) VALUES (?, 'onMg', '90', 0, 'person:1', 'trucks') RETURNING id",
		[run.site.siteId]
	);
	const site = { ...node, id: null as unknown as number, bayId: null as unknown as number };
	const askedMs = Date.now();
	expect(await run.acts([[site, 'parameters', { began }, askedMs]])).toEqual(['done']);
	const [row] = await run.rows<{ fromMs: number }>(
		'SELECT from_ms AS fromMs FROM parameter WHERE id = ?',
		[began]
	);
	expect(row!.fromMs).toBeGreaterThanOrEqual(askedMs);
	await send(atMs + MIN, QUIET, 2);
	expect(onMg()).toBe(before);
	await send(row!.fromMs + 1_000, QUIET, 2);
	expect(onMg()).toBe(90);
	const [{ id: next } = { id: 0 }] = await run.rows<{ id: number }>(
		"INSERT INTO parameter (site_id, name, value, from_ms, by_actor, why) VALUES (?, 'onMg', '70', ?, 'person:1', 'less') RETURNING id",
		[run.site.siteId, Date.now()]
	);
	expect(await run.acts([[site, 'parameters', { began: next, ended: began }, Date.now()]])).toEqual(
		['done']
	);
	await send(Date.now() + 5_000, QUIET, 2);
	expect(onMg()).toBe(70);
	expect(await run.acts([[site, 'parameters', { ended: next }, Date.now()]])).toEqual(['done']);
	await send(Date.now() + 30_000, QUIET, 2);
	expect(onMg()).toBe(before);
});

test('heartbeats that change nothing change no row and no cursor', async () => {
	let atMs = await inService();
	atMs = await send(atMs + MIN, QUIET, 6);
	const before = [await lastChange(), await shown()];
	for (let k = 0; k < 5; k += 1) atMs = await send(atMs + MIN, QUIET, 1);
	expect([await lastChange(), await shown()]).toEqual(before);
});

async function lastChange(): Promise<number> {
	const [row] = await run.rows<{ n: number }>('SELECT last_change AS n FROM site WHERE id = ?', [
		run.site.siteId
	]);
	return row!.n;
}

async function actIds(wanted: Parameters<typeof run.acts>[0]): Promise<number[]> {
	expect(await run.acts(wanted)).toEqual(wanted.map(() => 'done'));
	const rows = await run.rows<{ id: number }>('SELECT id FROM act ORDER BY id DESC LIMIT ?', [
		wanted.length
	]);
	return rows.map(({ id }) => id).reverse();
}

async function waitFor(good: () => Promise<boolean>): Promise<void> {
	const endMs = Date.now() + 10_000;
	while (!(await good())) {
		if (Date.now() > endMs) throw new Error('not within 10 s');
		await new Promise((resolve) => setTimeout(resolve, 30));
	}
}
