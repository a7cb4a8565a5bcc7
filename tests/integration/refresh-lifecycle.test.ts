import { afterAll, beforeAll, expect, test } from 'vitest';
import { CommandSender } from '$lib/server/ingest/command-sender';
import { apply } from '$lib/server/refreshes/apply';
import { ask } from '$lib/server/refreshes/ask';
import type { Proof } from '$lib/server/refreshes/proof';
import { RefreshWorker } from '$lib/server/refreshes/worker';
import * as commands from '$lib/server/store/queries/commands';
import { transaction } from '$lib/server/store/transaction';
import { setHabit } from '../../simulator/node';
import type { NodeEvent } from '../../simulator/film';
import { quietLog } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';
import { Street } from '../support/street';

const MIN = 60_000;
const run = new IngestRun();
const startMs = Date.now() - 240 * MIN;
let sender: CommandSender;

beforeAll(async () => {
	await run.begin({ nodes: 3 });
	sender = new CommandSender(run.pipeline.room.registry, run.subscriber);
});
afterAll(async () => await run.end());

/** A placed node whose quiet field is learned, its first pair taken, an hour ago. */
async function settled(i: number, events: NodeEvent[]): Promise<Street> {
	const street = new Street(run.node(i), events, startMs, {
		client: async (node) => await run.client(node),
		sendCommands: async (atMs) => {
			await sender.send(run.store.pool, atMs);
		}
	});
	await (await run.client(street.node)).listen();
	await street.boot();
	await run.acts([[street.node, 'place', { preCommissioned: true }, startMs + 1_000]]);
	await street.until(startMs + 8 * MIN);
	setHabit(street.state, { periodS: 60, deltaMg: 8 }, street.atMs);
	await street.until(startMs + 90 * MIN);
	return street;
}

const look = async (atMs: number) =>
	// A worker of its own each time: it must not matter that the server starts anew in between.
	await new RefreshWorker(run.store, quietLog()).look(atMs);

async function order(street: Street): Promise<number> {
	const wanted = { siteId: run.site.siteId, nodeId: street.node.id, bulkId: null, reason: 'test' };
	const asked = await transaction(
		run.store,
		async ({ sql }) => await ask(sql, { ...wanted, origin: 'person', by: 'person:1' }, street.atMs)
	);
	if (!asked.ok) throw new Error(asked.reason);
	await transaction(
		run.store,
		async ({ sql }) =>
			await apply(sql, asked.id, {
				...{ kind: 'approve', by: 'person:2', anyHour: true, ownAllowed: false },
				atMs: street.atMs
			} as const)
	);
	return asked.id;
}

const stepsOf = async (id: number) =>
	(
		await run.rows<{ to: string }>(
			'SELECT to_state AS `to` FROM refresh_transition WHERE refresh_id = ? ORDER BY id',
			[id]
		)
	).map(({ to }) => to);

const rowOf = async (id: number) =>
	(
		await run.rows<{
			state: string;
			verdict: string;
			proof: string;
			waitsFor: string | null;
			attempts: number;
		}>('SELECT state, verdict, proof, waits_for AS waitsFor, attempts FROM refresh WHERE id = ?', [
			id
		])
	)[0]!;

test('a film that lost 8 % is pulsed, measured and proved, over the real broker', async () => {
	const fromMs = startMs + 60 * MIN;
	const street = await settled(0, [
		{ kind: 'loss', atMs: fromMs, toMs: fromMs + 10 * MIN, remaining: [0.92, 0.92, 0.92] }
	]);
	const id = await order(street);
	await look(street.atMs);
	expect((await rowOf(id)).state).toBe('sent');
	await street.obey();
	await look(street.atMs);
	expect((await rowOf(id)).state).toBe('obeyed');
	await street.obey();
	expect(street.state.habit.periodS).toBe(2);

	// A vehicle during the measurement (as the plan would show it): what was counted is dropped.
	await street.until(street.atMs + MIN);
	const { bayId } = street.node;
	await run.rows("UPDATE bay_state SET state = 'occupied', since_ms = ? WHERE bay_id = ?", [
		...[street.atMs, bayId]
	]);
	await look(street.atMs);
	expect((await rowOf(id)).state).toBe('obeyed');
	await run.rows("UPDATE bay_state SET state = 'vacant', since_ms = ? WHERE bay_id = ?", [
		...[street.atMs, bayId]
	]);
	await look(street.atMs);
	await street.obey(2);
	await street.until(street.atMs + 4 * MIN);
	await look(street.atMs);
	const row = await rowOf(id);
	expect(row.verdict).toMatch(/^proved: the film had lost/);
	expect(row.state).toBe('proved');
	expect(await stepsOf(id)).toEqual([
		...['asked', 'approved', 'waiting', 'sent', 'obeyed', 'obeyed', 'obeyed', 'measured'],
		'proved'
	]);
	const proof = JSON.parse(row.proof) as Proof;
	// 1 - 0.92 of the healed field, and 8 % of |[180, 20, 440]| at 15 °C (κ -0.3 %/°C from 25 °C).
	expect(proof.filmLossPercent).toBeCloseTo(8, 0);
	// Each axis of the loss is the difference of readings with 0.6 mG noise: within 2 mG.
	const lossMg = 0.08 * Math.hypot(180, 20, 440) * 1.03;
	expect(Math.abs((proof.filmLossTotalMg ?? 0) - lossMg)).toBeLessThan(2);
	expect(proof.readings).toBeGreaterThanOrEqual(60);
	expect(proof.checks.every(({ ok }) => ok)).toBe(true);
});

test('answers lost and a reboot in between: the same id again, and no second pulse for it', async () => {
	const street = await settled(1, []);
	const id = await order(street);
	await look(street.atMs);
	const { pulses } = street.state;
	street.mute = true;
	await street.obey();
	expect(street.state.pulses).toBeGreaterThan(pulses);
	const fired = street.known.length;
	street.mute = false;
	await street.until(street.atMs + MIN);
	await street.boot();
	await sender.send(run.store.pool, street.atMs);
	await look(street.atMs);
	expect(await rowOf(id)).toMatchObject({ state: 'waiting', attempts: 1 });
	await look(street.atMs);
	expect((await rowOf(id)).waitsFor).toBe('pulse_within_hour');

	const afterBoot = street.state.pulses;
	await street.until(street.atMs + 62 * MIN);
	await look(street.atMs);
	expect(await rowOf(id)).toMatchObject({ state: 'sent', attempts: 1 });
	await street.obey();
	expect(street.state.pulses).toBe(afterBoot);
	expect(street.known).toHaveLength(fired);
	await look(street.atMs);
	expect((await rowOf(id)).state).toBe('obeyed');
	// The pair went lost with the node's memory: without its figures nothing is proved.
	await street.until(street.atMs + 11 * MIN);
	await look(street.atMs);
	expect((await rowOf(id)).state).toBe('waiting');
});

test('a pair that a rule asked for is entered as a film refresh with what it healed', async () => {
	const street = await settled(2, []);
	await transaction(
		run.store,
		async ({ sql }) =>
			await commands.order(sql, {
				...{ nodeId: street.node.id, verb: 'pair', report: null, boot: 1, cause: 'calibrate' },
				...{ byActor: 'rule', createdAtMs: street.atMs, expiresAtMs: street.atMs + MIN }
			} as const)
	);
	await street.obey();
	await street.until(street.atMs + 70 * MIN);
	await look(street.atMs);
	const [row] = await run.rows<{ id: number; state: string; reason: string; verdict: string }>(
		"SELECT id, state, reason, verdict FROM refresh WHERE origin = 'pair_rule' AND node_id = ?",
		[street.node.id]
	);
	expect(row).toMatchObject({ state: 'proved', reason: expect.stringContaining('pair by rule') });
	expect(row?.verdict).toMatch(/^proved: the film had lost \d/);
	expect(await stepsOf(row!.id)).toEqual(['obeyed', 'measured', 'proved']);
	await look(street.atMs);
	expect(await run.rows('SELECT id FROM refresh WHERE node_id = ?', [street.node.id])).toHaveLength(
		1
	);
});
