import { afterAll, beforeAll, expect, test } from 'vitest';
import type { ParsedMail } from 'mailparser';
import { readToken } from '$lib/server/outbox/link-token';
import { noteNetworks } from '$lib/server/store/queries/node-networks';
import { stormNodeIds } from '$lib/server/store/queries/notices';
import { NoticeRoom, showCondition } from '../support/notices';

const MIN = 60_000;
const HOUR = 60 * MIN;
const DAY = 24 * HOUR;
/** A Tuesday, 10:00 UTC: within nobody's quiet hours. */
const T0 = Date.parse('2026-12-01T10:00:00Z');

let room: NoticeRoom;
beforeAll(async () => {
	room = await NoticeRoom.open();
	await room.rows('UPDATE node_fast SET heard_at_ms = ?', [T0]);
	await room.rows("UPDATE person SET timezone = 'UTC'");
	const { people } = room.seeded;
	await room.rows(
		`INSERT INTO person (email, name, initials, role, all_sites, created_at_ms, timezone)
		 VALUES ('second@lodekeep.example', 'Sue Cond', 'SC', 'maintenance', 1, 0, 'UTC')`
	);
	expect(people.maintenance).toBeGreaterThan(0);
});
afterAll(async () => {
	await room.close();
});

const heardAt = async (nowMs: number, but = '') =>
	await room.rows(
		`UPDATE node_fast SET heard_at_ms = ? WHERE node_id NOT IN
			(SELECT n.id FROM node n JOIN bay b ON b.id = n.bay_id WHERE FIND_IN_SET(b.code, ?))`,
		[nowMs, but]
	);
const openOf = async (bay: string) =>
	await room.rows<{ id: number; kind: string; kinds: string; stage: number }>(
		`SELECT n.id, n.kind, n.kinds, n.stage FROM notice n JOIN bay b ON b.id = n.bay_id
		 WHERE b.code = ? AND n.closed_at_ms IS NULL`,
		[bay]
	);
const referencesOf = (mail: ParsedMail): string[] => [mail.references ?? []].flat();
const linkOf = (mail: ParsedMail, path: string): string =>
	new RegExp(`https://keep.example/${path}\\?token=([\\w-]+)`).exec(mail.text ?? '')?.[1] ?? '';

let first: ParsedMail;

test('what is stored opens one notice a node and one mail a person, with the headers of RFC 8058', async () => {
	await room.look(T0);
	expect(await openOf('B-02')).toMatchObject([
		{ kind: 'refresh_due', kinds: 'refresh_due,low_cell' }
	]);
	expect(await openOf('A-07')).toMatchObject([{ kind: 'inverted', kinds: 'inverted,refresh_due' }]);
	// One for each of the two of maintenance: the operator and the admin are not mailed of these.
	expect(await room.compose(T0)).toBe(2);
	const sender = room.sender();
	first = await room.box.next('maintenance@', '3 notices');
	await room.box.next('second@', '3 notices');
	await sender.close();
	expect(first.headers.get('auto-submitted')).toBe('auto-generated');
	const list = first.headerLines.find(({ key }) => key === 'list-unsubscribe-post');
	expect(list?.line).toBe('List-Unsubscribe-Post: List-Unsubscribe=One-Click');
	const token = linkOf(first, 'unsubscribe');
	expect(readToken(room.secret, 'unsubscribe', token, T0)).toMatchObject({ ok: true });
});

test('a second look at the same, and one after a restart, changes nothing', async () => {
	const before = await room.rows('SELECT COUNT(*) AS n FROM notice');
	await room.look(T0 + MIN);
	await room.rows('UPDATE notice_cursor SET looked_at_ms = 0');
	await room.look(T0 + 2 * MIN);
	expect(await room.rows('SELECT COUNT(*) AS n FROM notice')).toEqual(before);
});

test('one new of the site waits for the 15 minutes to be over, then goes in the thread of its node', async () => {
	await showCondition(room, 'B-02', { condition: 'clipped', also: 'refresh_due' }, T0 + 3 * MIN);
	await heardAt(T0 + 3 * MIN);
	await room.look(T0 + 3 * MIN);
	expect(await openOf('B-02')).toMatchObject([{ kind: 'clipped' }]);
	expect(await room.compose(T0 + 4 * MIN)).toBe(0);
	expect(await room.compose(T0 + 15 * MIN)).toBe(2);
	const sender = room.sender();
	const mail = await room.box.next('maintenance@', 'B-02, Tallow Yard: clipped');
	await sender.close();
	expect(mail.text).toContain("It was 'film refresh due' before.");
	expect(mail.inReplyTo).toBe(first.messageId);
	expect(referencesOf(mail)).toEqual([first.messageId]);
});

test('taking one tells the others told, in the same thread; who has it already keeps it', async () => {
	const [notice] = await openOf('A-07');
	const { people } = room.seeded;
	const take = { act: 'take' as const, ids: [notice!.id] };
	expect(await room.act(people.maintenance, take, T0 + 20 * MIN)).toEqual({
		ok: true,
		done: 1,
		left: 0
	});
	expect(await room.act(people.admin, take, T0 + 20 * MIN)).toMatchObject({ done: 0 });
	expect(await room.act(people.integrator, take, T0 + 20 * MIN)).toMatchObject({ ok: false });
	expect(await room.act(people.elsewhere, take, T0 + 20 * MIN)).toMatchObject({ done: 0, left: 1 });
	await room.compose(T0 + 21 * MIN);
	const sender = room.sender();
	const mail = await room.box.next('second@', 'Re: A-07');
	await sender.close();
	expect(mail.text).toContain('Mads Tense has it now.');
	expect(referencesOf(mail)).not.toEqual([]);
});

test('film refresh due outlives its condition and closes by the proof', async () => {
	await showCondition(room, 'B-02', { condition: 'in_service' }, T0 + 30 * MIN);
	await heardAt(T0 + 30 * MIN);
	await room.look(T0 + 30 * MIN);
	expect(await openOf('B-02')).toMatchObject([{ kind: 'refresh_due' }]);
	const { sites, bays } = room.seeded;
	await room.rows(
		`INSERT INTO refresh (site_id, node_id, bay_id, origin, state, reason, evidence, asked_by, asked_at_ms, ended_at_ms)
		 SELECT ?, id, ?, 'person', 'proved', '', '{}', 'person:1', ?, ? FROM node WHERE bay_id = ?`,
		[sites.yard, bays['B-02'], T0, T0 + 31 * MIN, bays['B-02']]
	);
	await heardAt(T0 + 32 * MIN);
	await room.look(T0 + 32 * MIN);
	expect(await openOf('B-02')).toEqual([]);
	expect(
		await room.rows(
			"SELECT closed_how AS how FROM notice WHERE about LIKE 'node:%' AND closed_how = 'proved'"
		)
	).toHaveLength(1);
});

test('what nobody takes in time goes to the admins, by mail and by name', async () => {
	const later = Date.parse('2026-12-02T10:01:00Z');
	await heardAt(later);
	await room.look(later);
	expect(await openOf('B-04')).toMatchObject([{ kind: 'clipped', stage: 2 }]);
	await room.compose(later);
	const sender = room.sender();
	const mail = await room.box.next('admin@', 'Nobody has it: B-04');
	await sender.close();
	expect(mail.text).toContain('It comes to the admins.');
});

test('silent nodes of one gateway are one notice that closes by itself; singles are held back meanwhile', async () => {
	const nowMs = Date.parse('2026-12-03T10:00:00Z');
	const codes = ['A-01', 'A-02', 'A-04', 'A-06', 'A-08', 'A-10'];
	await heardAt(nowMs);
	await room.rows(
		`UPDATE node n JOIN bay b ON b.id = n.bay_id SET n.gateway = IF(b.code IN (?), 'G2', 'G1')`,
		[codes]
	);
	await heardAt(nowMs - 20 * MIN, '');
	await heardAt(nowMs, codes.join());
	for (const code of codes) await showCondition(room, code, { condition: 'silent' }, nowMs);
	await room.look(nowMs);
	const storms = await room.rows<{ facts: string; kind: string }>(
		"SELECT kind, facts FROM notice WHERE about LIKE 'storm:%' AND closed_at_ms IS NULL"
	);
	expect(storms).toHaveLength(1);
	expect(JSON.parse(storms[0]!.facts)).toMatchObject({ count: 6, shared: 'gateway', label: 'G2' });
	expect(await openOf('A-01')).toEqual([]);
	for (const code of codes) await showCondition(room, code, { condition: 'in_service' }, nowMs);
	await heardAt(nowMs + MIN);
	await room.look(nowMs + MIN);
	expect(
		await room.rows("SELECT id FROM notice WHERE about LIKE 'storm:%' AND closed_how = 'healed'")
	).toHaveLength(1);
	// It was over before anybody was told: nobody is.
	await room.compose(nowMs + MIN);
	expect(
		await room.rows(
			"SELECT w.id FROM mail_wish w JOIN notice n ON n.id = w.notice_id WHERE n.about LIKE 'storm:%' AND w.message_id IS NOT NULL"
		)
	).toEqual([]);
});

test('nodes without a label that connected from one address are told together too', async () => {
	const nowMs = Date.parse('2026-12-03T14:00:00Z');
	const codes = ['B-01', 'B-02', 'B-05', 'B-06', 'B-07', 'B-08'];
	await heardAt(nowMs);
	await room.rows('UPDATE node SET gateway = NULL');
	// Addresses of RFC 5737, for documentation.
	const serials = codes.map((code): [string, string] => [`SEED-${code}`, '192.0.2.7']);
	const told = new Map([...serials, ['SEED-A-01', '198.51.100.4'], ['NOBODY-1', '192.0.2.7']]);
	await noteNetworks(room.store.pool, told, nowMs);
	await noteNetworks(room.store.pool, told, nowMs + 1);
	expect(
		await room.rows('SELECT since_ms FROM node_network WHERE since_ms = ?', [nowMs])
	).toHaveLength(7);
	await heardAt(nowMs - 20 * MIN, '');
	await heardAt(nowMs, codes.join());
	for (const code of codes) await showCondition(room, code, { condition: 'silent' }, nowMs);
	await room.look(nowMs);
	const [storm] = await room.rows<{ facts: string }>(
		"SELECT facts FROM notice WHERE about LIKE 'storm:%' AND closed_at_ms IS NULL"
	);
	expect(JSON.parse(storm!.facts)).toMatchObject({
		count: 6,
		shared: 'network',
		label: '192.0.2.7'
	});
	const held = await stormNodeIds(room.store.pool, [room.seeded.sites.yard]);
	expect(held.size).toBe(6);
	for (const code of codes) await showCondition(room, code, { condition: 'in_service' }, nowMs);
	await heardAt(nowMs + MIN);
	await room.look(nowMs + MIN);
});

test('a site not heard at all is late: one notice, mailed to everybody of it at any hour', async () => {
	const night = Date.parse('2026-12-04T02:00:00Z');
	await room.look(night);
	expect(
		await room.rows(
			"SELECT id FROM notice WHERE kind = 'site_late' AND closed_at_ms IS NULL AND site_id = ?",
			[room.seeded.sites.yard]
		)
	).toHaveLength(1);
	await room.compose(night);
	const sender = room.sender();
	await room.box.next('operator@', 'site late since');
	await sender.close();
	await heardAt(night + MIN);
	await room.look(night + MIN);
	expect(
		await room.rows(
			"SELECT id FROM notice WHERE kind = 'site_late' AND closed_at_ms IS NULL AND site_id = ?",
			[room.seeded.sites.yard]
		)
	).toEqual([]);
});

test('snoozing is maintenance’s, has an end, and moves the deadline', async () => {
	const [notice] = await openOf('A-03');
	const { people } = room.seeded;
	const snooze = { act: 'snooze' as const, ids: [notice!.id], until: '2026-12-10T10:00' };
	const nowMs = T0 + 3 * DAY;
	expect(await room.act(people.operator, snooze, nowMs)).toMatchObject({ ok: false });
	expect(
		await room.act(people.maintenance, { ...snooze, until: '2027-12-10T10:00' }, nowMs)
	).toMatchObject({
		ok: false
	});
	expect(await room.act(people.maintenance, snooze, nowMs)).toMatchObject({ done: 1 });
	const [row] = await room.rows<{ deadline: number }>(
		'SELECT deadline_ms AS deadline FROM notice WHERE id = ?',
		[notice!.id]
	);
	expect(row!.deadline).toBeGreaterThanOrEqual(Date.parse('2026-12-10T10:00Z'));
});

test('a node that comes and goes is one notice that says how often, mailed once', async () => {
	const nowMs = Date.parse('2026-12-08T10:00:00Z');
	const there = async (at: number, silent: boolean) => {
		await heardAt(at, 'A-02');
		await room.rows(
			`UPDATE node_fast f JOIN node n ON n.id = f.node_id JOIN bay b ON b.id = n.bay_id
			 SET f.heard_at_ms = ? WHERE b.code = 'A-02'`,
			[silent ? at - 20 * MIN : at]
		);
		await showCondition(room, 'A-02', { condition: silent ? 'silent' : 'in_service' }, at);
		await room.look(at);
	};
	await there(nowMs, true);
	const [first] = await openOf('A-02');
	const mailed = async () =>
		await room.rows<{ what: string }>(
			'SELECT what FROM mail_wish WHERE notice_id = ? AND message_id IS NOT NULL',
			[first!.id]
		);
	await room.compose(nowMs + 16 * MIN);
	const told = (await mailed()).length;
	expect(told).toBeGreaterThan(0);
	for (let i = 1; i <= 3; i += 1) {
		await there(nowMs + i * HOUR, false);
		expect(await openOf('A-02')).toEqual([]);
		await there(nowMs + i * HOUR + 30 * MIN, true);
		expect(await openOf('A-02')).toMatchObject([{ id: first!.id, kind: 'silent' }]);
		await room.compose(nowMs + i * HOUR + 50 * MIN);
	}
	expect(await mailed()).toHaveLength(told);
	const [row] = await room.rows<{ times: number }>('SELECT times FROM notice WHERE id = ?', [
		first!.id
	]);
	expect(row?.times).toBe(4);
	// A day after it healed it is news again.
	await there(nowMs + 4 * HOUR, false);
	await there(nowMs + 29 * HOUR, true);
	expect((await openOf('A-02'))[0]?.id).not.toBe(first!.id);
});

test('a person is written to in the language and at the hours of their own', async () => {
	const nowMs = Date.parse('2026-12-15T10:00:00Z');
	const { people } = room.seeded;
	// What the tests before have left to be told is no matter here.
	await room.rows('UPDATE mail_wish SET done_at_ms = 0 WHERE done_at_ms IS NULL');
	await room.rows("UPDATE person SET language = 'de' WHERE id = ?", [people.maintenance]);
	// 10:00 UTC is 23:00 there: quiet until 07:00, which is 18:00 UTC.
	await room.rows(
		"UPDATE person SET timezone = 'Pacific/Auckland' WHERE email = 'second@lodekeep.example'"
	);
	await heardAt(nowMs);
	await showCondition(room, 'A-06', { condition: 'inverted' }, nowMs);
	await room.look(nowMs);
	const due = await room.rows<{ email: string; dueMs: number }>(
		`SELECT p.email, w.due_ms AS dueMs FROM mail_wish w JOIN person p ON p.id = w.person_id
		 JOIN notice n ON n.id = w.notice_id JOIN bay b ON b.id = n.bay_id WHERE b.code = 'A-06' ORDER BY p.email`
	);
	expect(due).toEqual([
		{ email: 'maintenance@lodekeep.example', dueMs: nowMs },
		{ email: 'second@lodekeep.example', dueMs: Date.parse('2026-12-15T18:00:00Z') }
	]);
	await room.compose(nowMs);
	const sender = room.sender();
	const mail = await room.box.next('maintenance@', 'A-06, Tallow Yard: Film umgeklappt');
	await sender.close();
	expect(mail.text).toContain('eine Filmauffrischung genehmigen');
	expect(mail.html).toContain('<html lang="de">');
	expect(mail.attachments.map(({ cid }) => cid)).toContain('mark@lodekeep');
});
