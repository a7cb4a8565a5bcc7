import { describe, expect, test } from 'vitest';
import { begin, type Course, type RefreshEvent, type RefreshState, type Stepped } from './course';
import { step } from './lifecycle';
import { REFRESH_PARAMS as P } from './params';

/** Order of steps and ends: method.md, section 7. */
const DAY = 86_400_000;
const ID = '0102030405060708';
const OTHER = '1112131415161718';
const base = begin('person:1', 0);
const at = (state: RefreshState, more: Partial<Course> = {}): Course => ({
	...base,
	state,
	...(['sent', 'obeyed', 'measured'].includes(state)
		? { commandId: ID, boot: 3, attempts: 1 }
		: {}),
	...(state === 'measured' ? { pulseAtMs: 10, measureFromMs: 20, stillReadings: 60 } : {}),
	...more
});
const run = (course: Course, event: RefreshEvent): Stepped => step(course, event, P);
const took = (stepped: Stepped) => {
	if (!stepped.ok) throw new Error(stepped.reason);
	return stepped;
};
const approve = { kind: 'approve', by: 'person:2', anyHour: false, ownAllowed: false } as const;
const judged = { kind: 'judged', verdict: 'v', visit: false, notCuredBefore: 0 } as const;
const ack = (outcome: 0 | 1 | 2, commandId = ID) =>
	({ kind: 'answered', commandId, outcome, reason: 'r', atMs: 5 }) as const;

describe('each step of the lifecycle', () => {
	const measuring = at('obeyed', { pulseAtMs: 10, measureFromMs: 2_010 });
	test.each<[string, Course, RefreshEvent, RefreshState]>([
		['approved by another person', at('asked'), { ...approve, atMs: 1 }, 'approved'],
		[
			'approved by the asker where the site allows it',
			at('asked'),
			{ ...approve, by: 'person:1', ownAllowed: true, atMs: 1 },
			'approved'
		],
		['refused', at('asked'), { kind: 'refuse', by: 'person:2', why: 'w', atMs: 1 }, 'refused'],
		['taken up', at('approved'), { kind: 'take_up', atMs: 1 }, 'waiting'],
		['sent', at('waiting'), { kind: 'clear', freshId: ID, boot: 3, atMs: 1 }, 'sent'],
		['obeyed', at('sent'), ack(0), 'obeyed'],
		['refused by the node', at('sent'), ack(1), 'refused'],
		['failed once: waits again', at('sent'), ack(2), 'waiting'],
		['failed three times', at('sent', { attempts: 3 }), ack(2), 'refused'],
		['no answer in time', at('sent'), { kind: 'lapsed', atMs: 1 }, 'waiting'],
		['the node reboots in between', at('sent'), { kind: 'rebooted', atMs: 1 }, 'waiting'],
		['a late ack, while it waits', at('waiting', { commandId: ID }), ack(0), 'obeyed'],
		['figures lost', at('obeyed'), { kind: 'figures_lost', atMs: 1 }, 'waiting'],
		[
			'figures lost three times',
			at('obeyed', { attempts: 3 }),
			{ kind: 'figures_lost', atMs: 1 },
			'not_cured'
		],
		['a vehicle comes while it is measured', measuring, { kind: 'vehicle', atMs: 1 }, 'obeyed'],
		['60 still readings', measuring, { kind: 'counted', stillReadings: 60, atMs: 1 }, 'measured'],
		['cured', at('measured'), { ...judged, cured: true, atMs: 1 }, 'proved'],
		['not cured', at('measured'), { ...judged, cured: false, atMs: 1 }, 'not_cured']
	])('%s', (_, course, event, to) => {
		const { course: next, transition } = took(run(course, event));
		expect(next.state).toBe(to);
		expect(transition).toMatchObject({ from: course.state, to });
		expect(transition?.why).not.toBe('');
	});

	const OPEN: RefreshState[] = ['asked', 'approved', 'waiting', 'sent', 'obeyed', 'measured'];
	test.each(OPEN)('can be called off when %s', (state) => {
		const done = took(run(at(state), { kind: 'call_off', by: 'person:2', why: 'w', atMs: 7 }));
		expect(done.course).toMatchObject({ state: 'called_off', endedAtMs: 7 });
	});
	test.each(OPEN)('expires after 14 days when %s, not a moment sooner', (state) => {
		expect(run(at(state), { kind: 'tick', atMs: 14 * DAY - 1 }).ok).toBe(false);
		expect(took(run(at(state), { kind: 'tick', atMs: 14 * DAY })).course.state).toBe('expired');
	});
	test.each<RefreshState>(['proved', 'not_cured', 'refused', 'expired', 'called_off'])(
		'nothing moves it once it is %s',
		(state) => {
			const ended = at(state, { endedAtMs: 1, commandId: ID, obeyedAtMs: 1 });
			for (const event of [
				{ ...approve, atMs: 2 },
				{ kind: 'tick', atMs: 99 * DAY } as const,
				ack(0),
				ack(2),
				{ kind: 'take_up', atMs: 2 } as const
			])
				expect(run(ended, event)).toEqual({
					ok: false,
					reason: event.kind === 'answered' && event.outcome === 0 ? 'known_already' : 'ended'
				});
		}
	);
});

describe('commands', () => {
	test('nobody approves their own request unless the site allows it', () => {
		expect(run(at('asked'), { ...approve, by: 'person:1', atMs: 1 })).toEqual({
			ok: false,
			reason: 'own_request'
		});
	});
	test('the first attempt orders a pair under a fresh id, bound to the boot', () => {
		const { effects } = took(run(at('waiting'), { kind: 'clear', freshId: ID, boot: 3, atMs: 1 }));
		expect(effects).toEqual([{ kind: 'order_pair', commandId: ID, boot: 3 }]);
	});
	test('after a reboot or a lost answer it is the same id again, for the boot of now', () => {
		for (const kind of ['rebooted', 'lapsed'] as const) {
			const waits = took(run(at('sent'), { kind, atMs: 1 })).course;
			const again = took(run(waits, { kind: 'clear', freshId: OTHER, boot: 4, atMs: 2 }));
			expect(again.effects).toEqual([{ kind: 'order_again', commandId: ID, boot: 4 }]);
			expect(again.course.attempts).toBe(1);
		}
	});
	test('a pulse that failed gets a new id: the node would answer the old one as before', () => {
		const waits = took(run(at('sent'), ack(2))).course;
		const again = took(run(waits, { kind: 'clear', freshId: OTHER, boot: 3, atMs: 2 }));
		expect(again.effects).toEqual([{ kind: 'order_pair', commandId: OTHER, boot: 3 }]);
		expect(again.course.attempts).toBe(2);
	});
	test('an ack for another id changes nothing', () => {
		expect(run(at('sent'), ack(0, OTHER))).toEqual({ ok: false, reason: 'another_command' });
	});
	test('a second ack changes nothing', () => {
		expect(run(at('obeyed'), ack(0))).toEqual({ ok: false, reason: 'known_already' });
	});
	test('called off while under way, the command is given up; obeyed all the same is kept once', () => {
		const off = took(run(at('sent'), { kind: 'call_off', by: 'person:2', why: 'w', atMs: 1 }));
		expect(off.effects).toEqual([{ kind: 'give_up_command', commandId: ID }]);
		const late = took(run(off.course, ack(0)));
		expect(late.transition).toMatchObject({ from: 'called_off', to: 'called_off', by: 'node' });
		expect(late.course.endedAtMs).toBe(1);
		expect(run(late.course, ack(0)).ok).toBe(false);
	});
	test('what holds it back is told with since when, and stays until another does', () => {
		const held = took(run(at('waiting'), { kind: 'blocked', guard: 'bay_taken', atMs: 5 }));
		expect(held.course).toMatchObject({ waitsFor: 'bay_taken', waitsSinceMs: 5 });
		expect(held.transition).toBeNull();
		expect(run(held.course, { kind: 'blocked', guard: 'bay_taken', atMs: 9 }).ok).toBe(false);
	});
});

describe('measuring', () => {
	const pulsed = took(
		run(at('obeyed'), { kind: 'pulsed', commandId: ID, pulseAtMs: 1_000, atMs: 1_500 })
	);
	test('begins 2 s after the pulse and asks for fast reports', () => {
		expect(pulsed.course.measureFromMs).toBe(3_000);
		expect(pulsed.effects).toEqual([{ kind: 'report_fast' }]);
	});
	test('59 still readings are not enough', () => {
		const counted = took(run(pulsed.course, { kind: 'counted', stillReadings: 59, atMs: 2 }));
		expect(counted.course.state).toBe('obeyed');
	});
	test('a vehicle drops what was counted; it begins anew when the bay is empty', () => {
		const some = took(run(pulsed.course, { kind: 'counted', stillReadings: 30, atMs: 2 })).course;
		const there = took(run(some, { kind: 'vehicle', atMs: 3 }));
		expect(there.course).toMatchObject({ disturbed: true, stillReadings: 0 });
		expect(there.effects).toEqual([{ kind: 'report_usual' }]);
		expect(run(there.course, { kind: 'counted', stillReadings: 60, atMs: 4 }).ok).toBe(false);
		const empty = took(run(there.course, { kind: 'empty', sinceMs: 9_000, atMs: 5 }));
		expect(empty.course).toMatchObject({ disturbed: false, measureFromMs: 9_000 });
		expect(empty.effects).toEqual([{ kind: 'report_fast' }]);
	});
	test('measured, the former habit is put back', () => {
		const done = took(run(pulsed.course, { kind: 'counted', stillReadings: 61, atMs: 2 }));
		expect(done.effects).toEqual([{ kind: 'report_usual' }]);
	});
	test('a second time not cured sends somebody, not a third pulse', () => {
		const once = took(run(at('measured'), { ...judged, cured: false, atMs: 1 }));
		expect(once.effects).toEqual([]);
		const twice = took(
			run(at('measured'), { ...judged, cured: false, notCuredBefore: 1, atMs: 1 })
		);
		expect(twice.course.visitWanted).toBe(true);
		expect(twice.effects[0]).toMatchObject({ kind: 'send_someone' });
	});
});
