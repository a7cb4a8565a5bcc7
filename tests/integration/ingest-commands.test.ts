import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { CommandSender } from '$lib/server/ingest/command-sender';
import { keepHabits } from '$lib/server/ingest/habit-keeper';
import { openCommand } from '$lib/wire/frames';
import type { AckFrame, CommandFrame, HelloFrame, PairFrame } from '$lib/wire/types';
import { eventually, noisy, QUIET, reading, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const MIN = 60_000;
const run = new IngestRun();
let node: TestNode;
let sender: CommandSender;
let next = 0;
let seq = 0;

beforeAll(async () => {
	await run.begin({ nodes: 8 });
});
afterAll(async () => await run.end());
beforeEach(async () => {
	node = run.node(next++);
	seq = 0;
	sender = new CommandSender(run.pipeline.room.registry, run.subscriber);
	await (await run.client(node)).listen();
});

const heard = async (boot = 1) =>
	await run.send(node, reading({ boot, seq: seq++, t: Date.now(), rows: [[0, QUIET]] }));

/** What the node has been sent, opened as the node would. */
async function sent(count: number): Promise<CommandFrame[]> {
	const client = await run.client(node);
	await eventually(
		async () => client.commands.length,
		(n) => n >= count,
		3_000
	);
	return client.commands.map((bytes) => {
		const opened = openCommand(`lodekeep/1/${node.serial}/down`, bytes, node.key.key);
		if (!opened.ok) throw new Error(opened.reason);
		return opened.frame;
	});
}

const ack = (command: CommandFrame, habit: AckFrame['habit'] = command.report): AckFrame => ({
	kind: 'ack',
	boot: command.boot,
	seq: seq++,
	t: Date.now(),
	sentMs: null,
	unsigned: false,
	commandId: command.id,
	outcome: 0,
	reason: null,
	before: null,
	after: null,
	pulse: null,
	habit,
	rssiDbm: null
});

const rows = async () =>
	await run.rows<{ verb: string; cause: string; outcome: number | null; reason: string | null }>(
		'SELECT verb, cause, outcome, reason FROM command WHERE node_id = ? ORDER BY created_at_ms, id',
		[node.id]
	);

test('placing asks for fast reports and a pair; learned, the former habit is put back', async () => {
	const startMs = Date.now() - 5 * MIN;
	await run.send(node, reading({ boot: 3, seq: seq++, t: startMs - MIN, rows: [[0, QUIET]] }));
	await run.acts([[node, 'place', { preCommissioned: true }, startMs]]);
	await eventually(rows, (seen) => seen.length >= 2);
	await sender.send(run.store.pool, Date.now());
	const commands = await sent(2);
	expect(commands.map(({ verb, boot }) => [verb, boot]).sort()).toEqual([
		['pair', 3],
		['report', 3]
	]);
	const report = commands.find(({ verb }) => verb === 'report')!;
	expect(report.report?.periodS).toBe(2);
	await run.send(node, ack(report));
	const [habit] = await run.rows('SELECT period_s AS p FROM node WHERE id = ?', [node.id]);
	expect(habit).toEqual({ p: 2 });

	const list = Array.from({ length: 70 }, (_, i) => [i * 2_000, noisy(QUIET, i)] as const);
	await run.send(node, reading({ boot: 3, seq: seq++, t: startMs + 1_000, rows: list }));
	await sender.send(run.store.pool, Date.now());
	const back = (await sent(3)).at(-1)!;
	expect(back.report?.periodS).toBe(60);
	await run.send(node, ack(back));
	expect(await run.rows('SELECT period_s AS p FROM node WHERE id = ?', [node.id])).toEqual([
		{ p: 60 }
	]);
});

test('an unanswered command comes again as the same id after 10 s, not before', async () => {
	await heard();
	await run.acts([[node, 'ask', {}, Date.now()]]);
	const nowMs = Date.now();
	await sender.send(run.store.pool, nowMs);
	await sender.send(run.store.pool, nowMs + 9_000);
	expect(await sent(1)).toHaveLength(1);
	await sender.send(run.store.pool, nowMs + 10_500);
	const [first, second] = await sent(2);
	expect(Buffer.from(second!.id)).toEqual(Buffer.from(first!.id));
	await run.send(node, ack(first!));
	await sender.send(run.store.pool, nowMs + 60_000);
	expect(await sent(2)).toHaveLength(2);
	expect((await rows())[0]).toMatchObject({ outcome: 0 });
});

test('an expired command is not sent', async () => {
	await heard();
	await run.acts([[node, 'ask', {}, Date.now()]]);
	await sender.send(run.store.pool, Date.now() + 2 * 3_600_000);
	const client = await run.client(node);
	await new Promise((resolve) => setTimeout(resolve, 200));
	expect(client.commands).toHaveLength(0);
});

test('after a reboot a command of ingest is ordered anew for the new boot', async () => {
	await heard(1);
	await run.rows(
		`INSERT INTO command (id, node_id, verb, period_s, delta_mg, boot, cause, by_actor, created_at_ms, expires_at_ms)
		 VALUES (UNHEX('0102030405060708'), ?, 'report', 60, 8, 1, 'habit', 'rule', 1, ?)`,
		[node.id, Date.now() + MIN]
	);
	seq = 0;
	await heard(2);
	await sender.send(run.store.pool, Date.now());
	await sender.send(run.store.pool, Date.now());
	const [command] = await sent(1);
	expect(command).toMatchObject({ boot: 2, verb: 'report' });
	expect((await rows()).map(({ outcome }) => outcome)).toEqual([2, null]);
});

test('a pair that answers a command ends it and is stored as a pulse', async () => {
	await heard();
	const id = Buffer.from('1112131415161718', 'hex');
	await run.rows(
		`INSERT INTO command (id, node_id, verb, boot, cause, by_actor, created_at_ms, expires_at_ms) VALUES (?, ?, 'pair', 1, 'learning', 'rule', 1, ?)`,
		[id, node.id, Date.now() + MIN]
	);
	const pair: PairFrame = {
		kind: 'pair',
		boot: 1,
		seq: seq++,
		t: Date.now(),
		sentMs: null,
		unsigned: false,
		set: [3_000, -400, 7_300],
		reset: [-2_900, 420, -7_120],
		before: { polarity: 1, counts: [2_990, -400, 7_280] },
		after: [3_000, -400, 7_300],
		tempDc: 151,
		batteryMv: 3_590,
		commandId: new Uint8Array(id),
		pulse: { ageS: 0, count: 4 },
		rssiDbm: -71
	};
	await run.send(node, pair);
	expect((await rows())[0]).toMatchObject({ verb: 'pair', outcome: 0 });
	const pulses = await run.rows(
		'SELECT source, set_x AS sx, reset_z AS rz, before_p AS p, after_y AS ay, polarity_after AS after FROM pulse WHERE node_id = ?',
		[node.id]
	);
	expect(pulses).toEqual([{ source: 'pair', sx: 3_000, rz: -7_120, p: 1, ay: -400, after: 1 }]);
});

test('the ack of a reset leaves the film at -1, the ack of a report fires nothing', async () => {
	await heard();
	for (const [hex, verb] of [
		['2112131415161718', 'reset'],
		['2212131415161718', 'report']
	] as const) {
		const id = Buffer.from(hex, 'hex');
		await run.rows(
			`INSERT INTO command (id, node_id, verb, boot, cause, by_actor, created_at_ms, expires_at_ms) VALUES (?, ?, ?, 1, 'test', 'rule', 1, ?)`,
			[id, node.id, verb, Date.now() + MIN]
		);
		await run.send(node, {
			...ack({ id: new Uint8Array(id), boot: 1 } as CommandFrame, null),
			before: { polarity: 1, counts: QUIET },
			after: [-2_900, 420, -7_120]
		});
	}
	expect(
		await run.rows('SELECT source, polarity_after AS after FROM pulse WHERE node_id = ?', [node.id])
	).toEqual([{ source: 'ack', after: -1 }]);
});

test('a hello keeps boot, firmware and habit', async () => {
	const hello: HelloFrame = {
		kind: 'hello',
		boot: 9,
		seq: 0,
		t: Date.now(),
		sentMs: null,
		unsigned: false,
		firmware: 'reed 2.4',
		profile: 'amr-18-16384',
		cause: 'watchdog',
		tempDc: 100,
		batteryMv: 3_600,
		before: null,
		after: null,
		pulse: { ageS: 1, count: 1 },
		habit: { periodS: 30, deltaMg: 12 },
		tx: { frames: 10, radioMs: 400 },
		rssiDbm: -60
	};
	await run.send(node, hello);
	expect(
		await run.rows(
			'SELECT firmware, boot_cause AS cause, period_s AS p, delta_mg AS d FROM node WHERE id = ?',
			[node.id]
		)
	).toEqual([{ firmware: 'reed 2.4', cause: 'watchdog', p: 30, d: 12 }]);
	expect(await run.rows('SELECT boot, firmware FROM boot WHERE node_id = ?', [node.id])).toEqual([
		{ boot: 9, firmware: 'reed 2.4' }
	]);
	expect(await run.rows('SELECT source FROM pulse WHERE node_id = ?', [node.id])).toEqual([
		{ source: 'hello' }
	]);
});

test('a node that reports oftener than it should is put back to its usual habit', async () => {
	const startMs = Date.now() - 20 * MIN;
	await heard();
	await run.acts([[node, 'place', { preCommissioned: true }, startMs]]);
	const list = Array.from({ length: 60 }, (_, i) => [i * 10_000, noisy(QUIET, i)] as const);
	await run.send(node, reading({ seq: seq++, t: startMs + 1_000, rows: list }));
	await run.rows('UPDATE command SET answered_at_ms = 1, outcome = 0 WHERE node_id = ?', [node.id]);
	await run.rows('UPDATE node SET period_s = 5 WHERE id = ?', [node.id]);
	await run.pipeline.room.registry.loadSome(run.store.pool, { ids: [node.id] }, Date.now());
	await keepHabits(run.pipeline, Date.now() + 60 * MIN);
	const open = (await rows()).filter(({ outcome }) => outcome === null);
	expect(open).toEqual([{ verb: 'report', cause: 'habit', outcome: null, reason: null }]);
});
