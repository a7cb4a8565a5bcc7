import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { createLog } from '$lib/server/log';
import { apply } from '$lib/server/refreshes/apply';
import { ask } from '$lib/server/refreshes/ask';
import { actOnBulk, orderBulk, preview, type BulkDeed } from '$lib/server/refreshes/bulk';
import { REFRESH_PARAMS } from '$lib/server/refreshes/params';
import { sheetOf } from '$lib/server/refreshes/sheet';
import { RefreshWorker } from '$lib/server/refreshes/worker';
import { transaction } from '$lib/server/store/transaction';
import { NoticeRoom } from '../support/notices';

const MIN = 60_000;
const HOUR = 60 * MIN;
const DAY = 24 * HOUR;
/** 03:00 at the seeded yard (Etc/GMT+1 is one hour behind UTC): within its quiet hours, 01:00 to 05:00. */
const NIGHT = Date.parse('2026-12-02T04:00:00Z');

let room: NoticeRoom;
beforeAll(async () => {
	room = await NoticeRoom.open();
	await room.rows('UPDATE bay_state SET since_ms = ?', [NIGHT - DAY]);
	await room.rows('UPDATE site SET quiet_from_min = 60, quiet_to_min = 300');
});
afterAll(async () => {
	await room.close();
});
beforeEach(async () => {
	for (const table of ['refresh_transition', 'refresh', 'refresh_bulk', 'command'])
		await room.rows(`DELETE FROM ${table}`);
});

const look = async (nowMs: number) =>
	await new RefreshWorker(room.store, createLog({ level: 'silent', part: 'test' })).look(nowMs);
const states = async () =>
	(
		await room.rows<{ state: string; n: number }>(
			'SELECT state, COUNT(*) AS n FROM refresh GROUP BY state ORDER BY state'
		)
	).map(({ state, n }) => `${state}:${n}`);
const waits = async (bay: string) =>
	(
		await room.rows<{ state: string; waitsFor: string | null }>(
			'SELECT r.state, r.waits_for AS waitsFor FROM refresh r JOIN bay b ON b.id = r.bay_id WHERE b.code = ? ORDER BY r.id DESC LIMIT 1',
			[bay]
		)
	)[0];
const wanted = async (bay: string, nowMs: number, anyHour = false): Promise<number> =>
	await transaction(room.store, async ({ sql }) => {
		const nodeId = room.seeded.nodes[`SEED-${bay}`]!;
		const order = { siteId: room.seeded.sites.yard, nodeId, bulkId: null, reason: 'test' };
		const asked = await ask(sql, { ...order, origin: 'person', by: 'person:1' }, nowMs);
		if (!asked.ok) throw new Error(asked.reason);
		const approve = { kind: 'approve', by: 'person:2', anyHour, ownAllowed: false } as const;
		await apply(sql, asked.id, { ...approve, atMs: nowMs });
		return asked.id;
	});

describe('a bulk order', () => {
	const which = { zone: 'A' };
	const order = async () =>
		await transaction(room.store, async ({ sql }) => {
			const siteId = room.seeded.sites.yard;
			const wanted = { siteId, which, personal: true, reason: 'after the crane', by: 'person:1' };
			return (await orderBulk(sql, wanted, NIGHT))!;
		});
	const deed = async (id: number, what: BulkDeed, by = 'person:2', anyHour = false) =>
		await transaction(
			room.store,
			async ({ sql }) =>
				await actOnBulk(sql, id, { deed: what, by, why: 'w', anyHour, ownAllowed: false }, NIGHT)
		);
	const reportOf = async (nowMs: number) => {
		const reader = { personal: true, actor: 'person:1' };
		const sheet = await sheetOf(room.store.pool, { id: room.seeded.sites.yard }, reader, nowMs);
		return sheet.bulks[0]!;
	};

	test('says beforehand who qualifies, why others do not, and the price in charge and days', async () => {
		await wanted('A-02', NIGHT);
		const seen = await preview(room.store.pool, room.seeded.sites.yard, which, true);
		// Twelve bays in the zone: A-05 is silent, A-02 has one open.
		expect(seen.bays).toHaveLength(10);
		expect(seen.leftOut).toEqual([
			{ bay: 'A-02', why: 'one is open for this node already' },
			{ bay: 'A-05', why: 'the node is silent' }
		]);
		// By hand in guards.test.ts: 192.36 mC and 0.0477 days of the cell each.
		expect(seen.price.chargeMc).toBeCloseTo(10 * 192.36, 3);
		expect(seen.mostDays).toBeCloseTo(192_360 / 4_034_584.5, 4);
	});

	test('is approved by another person, keeps to the ceiling, is paused, goes on, is called off with its report', async () => {
		const { id, asked } = await order();
		expect(asked).toBe(11);
		expect(await deed(id, 'approve', 'person:1')).toEqual({ moved: 0, own: 11 });
		expect(await deed(id, 'approve')).toEqual({ moved: 11, own: 0 });
		await look(NIGHT);
		// At most three commands at once; A-02 … are empty, odd ones taken (tests/support/seed.ts).
		expect(await states()).toEqual(['waiting:8', 'sent:3']);
		expect(await waits('A-10')).toEqual({ state: 'waiting', waitsFor: 'site_busy' });
		expect(await deed(id, 'pause')).toEqual({ moved: 1, own: 0 });
		await look(NIGHT + 5_000);
		expect(await waits('A-10')).toEqual({ state: 'waiting', waitsFor: 'paused' });
		expect(await waits('A-01')).toEqual({ state: 'waiting', waitsFor: 'paused' });
		expect(await deed(id, 'go_on')).toEqual({ moved: 1, own: 0 });
		await look(NIGHT + 10_000);
		expect(await waits('A-10')).toEqual({ state: 'waiting', waitsFor: 'site_busy' });
		expect(await waits('A-01')).toEqual({ state: 'waiting', waitsFor: 'bay_taken' });
		// One has obeyed by now: it is measured to its end.
		await room.rows("UPDATE refresh SET state = 'obeyed' WHERE state = 'sent' ORDER BY id LIMIT 1");
		expect(await deed(id, 'call_off')).toEqual({ moved: 10, own: 0 });
		expect(await reportOf(NIGHT + MIN)).toMatchObject({
			...{ state: 'called_off', endedAt: null, counts: { called_off: 10, obeyed: 1 } }
		});
		// What was under way is told to wait for no pulse any more.
		const open = await room.rows(
			"SELECT id FROM command WHERE verb = 'pair' AND expires_at_ms > ?",
			[NIGHT + MIN]
		);
		expect(open).toHaveLength(1);
	});

	test('is done when the last of it has ended, and reports how each ended', async () => {
		const { id } = await order();
		await deed(id, 'approve');
		const rows = await room.rows<{ id: number }>('SELECT id FROM refresh ORDER BY id');
		for (const [i, row] of rows.entries())
			await transaction(room.store, async ({ sql }) => {
				const atMs = NIGHT + i;
				if (i < 4) await apply(sql, row.id, { kind: 'call_off', by: 'person:2', why: 'w', atMs });
				else await apply(sql, row.id, { kind: 'tick', atMs: NIGHT + 15 * DAY });
			});
		const report = await reportOf(NIGHT + 15 * DAY);
		expect(report).toMatchObject({ state: 'done', counts: { called_off: 4, expired: 7 } });
		expect(report.endedAt).not.toBeNull();
		expect(report.leftOut).toEqual([{ bay: 'A-05', why: 'the node is silent' }]);
	});

	test('at any hour only where the approver said so', async () => {
		const noon = NIGHT + 8 * HOUR;
		await wanted('A-04', noon);
		await wanted('A-06', noon, true);
		await look(noon);
		expect(await waits('A-04')).toEqual({ state: 'waiting', waitsFor: 'quiet_hours' });
		expect((await waits('A-06'))?.state).toBe('sent');
	});
});

describe('the schedule', () => {
	const rule = async (on: boolean, reasons: string, most: number) => {
		await room.rows('DELETE FROM refresh_settings');
		await room.rows(
			`INSERT INTO refresh_settings (site_id, own_approval, most_at_once, hold_off_h, schedule_on, schedule_reasons,
				most_a_night, changed_by, changed_at_ms) VALUES (?, 0, 3, 12, ?, ?, ?, 'person:1', 0)`,
			[room.seeded.sites.yard, on, reasons, most]
		);
	};
	const byRule = async () =>
		await room.rows<{ bay: string; state: string; reason: string; approvedBy: string }>(
			`SELECT b.code AS bay, r.state, r.reason, r.approved_by AS approvedBy FROM refresh r
			 JOIN bay b ON b.id = r.bay_id WHERE r.origin = 'schedule' ORDER BY r.id`
		);

	test('is off until somebody turns it on', async () => {
		await room.rows('DELETE FROM refresh_settings');
		await look(NIGHT);
		expect(await byRule()).toEqual([]);
	});
	test('takes the reasons chosen, in quiet hours only', async () => {
		await rule(true, 'inverted', 5);
		await look(NIGHT + 8 * HOUR);
		expect(await byRule()).toEqual([]);
		await look(NIGHT);
		// A-07 alone is inverted in the seed; it is taken, so that it waits for an empty bay.
		expect(await byRule()).toEqual([
			{
				...{ bay: 'A-07', state: 'waiting', approvedBy: 'rule' },
				reason: 'by schedule: the film is flipped'
			}
		]);
	});
	test('takes so many a night, and more the next', async () => {
		await rule(true, 'inverted,strong_field', 1);
		await look(NIGHT);
		await look(NIGHT + HOUR);
		expect(await byRule()).toHaveLength(1);
		await look(NIGHT + DAY);
		expect(await byRule()).toHaveLength(2);
		await room.rows('DELETE FROM refresh_settings');
	});
});

describe('a node that cannot be reached', () => {
	test('is not answered for: the same command waits, and ends after 14 days', async () => {
		const id = await wanted('A-08', NIGHT);
		await look(NIGHT);
		const [first] = await room.rows<{ id: Buffer }>('SELECT id FROM command');
		const over = NIGHT + REFRESH_PARAMS.commandMs + REFRESH_PARAMS.graceMs;
		await look(over - 1);
		expect((await waits('A-08'))?.state).toBe('sent');
		await look(over);
		await look(over + 2_000);
		expect(await waits('A-08')).toEqual({ state: 'waiting', waitsFor: 'pulse_within_hour' });
		await look(NIGHT + HOUR + MIN);
		const [again] = await room.rows<{ n: number; id: Buffer }>(
			'SELECT COUNT(*) AS n, MAX(id) AS id FROM command'
		);
		expect(again).toEqual({ n: 1, id: first!.id });
		await look(NIGHT + 14 * DAY);
		expect((await waits('A-08'))?.state).toBe('expired');
		expect(
			await room.rows('SELECT id FROM command WHERE expires_at_ms > ?', [NIGHT + 14 * DAY])
		).toEqual([]);
		const steps = await room.rows<{ why: string }>(
			'SELECT why FROM refresh_transition WHERE refresh_id = ? ORDER BY id',
			[id]
		);
		expect(steps.map(({ why }) => why)).toContain('no answer came in time');
	});

	test('is not commanded while it is one of many that fell silent together', async () => {
		const codes = ['A-02', 'A-04', 'A-06', 'A-08', 'A-10'];
		await room.rows(
			`UPDATE node n JOIN bay b ON b.id = n.bay_id SET n.gateway = IF(b.code IN (?), 'G2', 'G1')`,
			[codes]
		);
		await room.rows('UPDATE node_fast SET heard_at_ms = ?', [NIGHT]);
		await room.rows(
			`UPDATE bay_state s JOIN bay b ON b.id = s.bay_id SET s.condition = 'silent' WHERE b.code IN (?)`,
			[codes]
		);
		await room.look(NIGHT);
		await wanted('A-04', NIGHT);
		await wanted('A-12', NIGHT);
		await look(NIGHT);
		expect(await waits('A-04')).toEqual({ state: 'waiting', waitsFor: 'storm' });
		expect((await waits('A-12'))?.state).toBe('sent');
		await room.rows(
			`UPDATE bay_state s JOIN bay b ON b.id = s.bay_id SET s.condition = 'in_service' WHERE b.code IN (?)`,
			[codes]
		);
		await look(NIGHT + MIN);
		expect((await waits('A-04'))?.state).toBe('sent');
	});
});
