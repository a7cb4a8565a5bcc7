import fc from 'fast-check';
import { expect, test } from 'vitest';
import { begin, isEnded, type Course, type RefreshEvent } from './course';
import { step } from './lifecycle';
import { REFRESH_PARAMS } from './params';

/**
 * A film refresh against a node as protocol.md ('Topics', down) describes it: bound to the boot, the last ids
 * and outcomes kept over a reboot, the id stored before the pulse. Between them a line that loses, doubles
 * and delays.
 */
class World {
	course: Course = { ...begin('person:1', 0), state: 'waiting' };
	nodeBoot = 1;
	/** Outcomes by id, kept over a reboot. */
	readonly known = new Map<string, 0 | 2>();
	readonly pulses: string[] = [];
	readonly orders: string[] = [];
	/** On the line. */
	down: { id: string; boot: number }[] = [];
	up: { id: string; outcome: 0 | 2 }[] = [];
	open: { id: string; boot: number } | null = null;
	nextId = 1;
	atMs = 0;

	feed(event: RefreshEvent): boolean {
		const stepped = step(this.course, event, REFRESH_PARAMS);
		if (!stepped.ok) return false;
		this.course = stepped.course;
		for (const effect of stepped.effects) {
			if (effect.kind === 'order_pair' || effect.kind === 'order_again') {
				if (effect.kind === 'order_pair') this.orders.push(effect.commandId);
				this.open = { id: effect.commandId, boot: effect.boot };
			}
			if (effect.kind === 'give_up_command') this.open = null;
		}
		if (this.course.state !== 'sent') this.open = null;
		return true;
	}

	act(what: Act): void {
		this.atMs += 1_000;
		const atMs = this.atMs;
		if (what === 'clear') {
			const freshId = `id${this.nextId++}`;
			this.feed({ kind: 'clear', freshId, boot: this.nodeBoot, atMs });
		} else if (what === 'transmit' && this.open !== null) this.down.push(this.open);
		else if (what === 'lose_down') this.down.shift();
		else if (what === 'lose_up') this.up.shift();
		else if (what === 'double_down' && this.down[0] !== undefined) this.down.push(this.down[0]);
		else if (what === 'reboot') this.nodeBoot += 1;
		else if (what === 'hear' || what === 'hear_fail') this.#node(what === 'hear' ? 0 : 2);
		else if (what === 'answer') this.#answer();
		else if (what === 'notice_reboot' && this.open !== null && this.open.boot !== this.nodeBoot)
			this.feed({ kind: 'rebooted', atMs });
		else if (what === 'lapse') this.feed({ kind: 'lapsed', atMs });
		else if (what === 'figures_lost') this.feed({ kind: 'figures_lost', atMs });
		else if (what === 'foreign')
			this.feed({ kind: 'answered', commandId: 'foreign', outcome: 0, reason: null, atMs });
		else if (what === 'call_off') this.feed({ kind: 'call_off', by: 'person:2', why: 'w', atMs });
	}

	#node(outcome: 0 | 2): void {
		const command = this.down.shift();
		if (command === undefined) return;
		const before = this.known.get(command.id);
		if (before !== undefined) this.up.push({ id: command.id, outcome: before });
		else if (command.boot === this.nodeBoot) {
			this.known.set(command.id, outcome);
			if (outcome === 0) this.pulses.push(command.id);
			this.up.push({ id: command.id, outcome });
		}
	}

	#answer(): void {
		const ack = this.up.shift();
		if (ack === undefined) return;
		const { id: commandId, outcome } = ack;
		this.feed({ kind: 'answered', commandId, outcome, reason: null, atMs: this.atMs });
	}
}

const ACTS = [
	'clear',
	'transmit',
	'lose_down',
	'lose_up',
	'double_down',
	'reboot',
	'hear',
	'hear_fail',
	'answer',
	'notice_reboot',
	'lapse',
	'figures_lost',
	'foreign',
	'call_off'
] as const;
type Act = (typeof ACTS)[number];

const stories = fc.array(fc.constantFrom(...ACTS.filter((a) => a !== 'call_off')), {
	maxLength: 120
});
const withEnd = fc.array(fc.constantFrom(...ACTS), { maxLength: 120 });

test('no command is obeyed twice, whatever is lost, doubled or late', () => {
	fc.assert(
		fc.property(withEnd, (acts) => {
			const world = new World();
			for (const act of acts) world.act(act);
			expect(new Set(world.pulses).size).toBe(world.pulses.length);
			// A fresh id only after the node's own 'failed', or after figures that were lost.
			expect(world.orders.length).toBeLessThanOrEqual(REFRESH_PARAMS.mostAttempts);
		}),
		{ numRuns: 3_000 }
	);
});

test('without a lost answer to a pulse there is one pulse at the most', () => {
	fc.assert(
		fc.property(
			fc.array(fc.constantFrom(...ACTS.filter((a) => a !== 'figures_lost')), { maxLength: 120 }),
			(acts) => {
				const world = new World();
				for (const act of acts) world.act(act);
				expect(world.pulses.length).toBeLessThanOrEqual(1);
			}
		),
		{ numRuns: 3_000 }
	);
});

test('no command is lost: once the line is good again it ends or is obeyed', () => {
	fc.assert(
		fc.property(stories, (acts) => {
			const world = new World();
			for (const act of acts) world.act(act);
			for (let i = 0; i < 8 && !isEnded(world.course.state) && world.course.state !== 'obeyed'; i++)
				for (const act of ['notice_reboot', 'clear', 'transmit'] as const) {
					world.act(act);
					while (world.down.length > 0) world.act('hear');
					while (world.up.length > 0) world.act('answer');
				}
			const { state } = world.course;
			expect(state === 'obeyed' || isEnded(state), state).toBe(true);
		}),
		{ numRuns: 3_000 }
	);
});

test('whatever comes, a course that has ended stays ended at its own time', () => {
	fc.assert(
		fc.property(withEnd, (acts) => {
			const world = new World();
			let endedAtMs: number | null = null;
			for (const act of acts) {
				world.act(act);
				if (endedAtMs !== null) expect(world.course.endedAtMs).toBe(endedAtMs);
				({ endedAtMs } = world.course);
				expect(endedAtMs !== null).toBe(isEnded(world.course.state));
			}
		}),
		{ numRuns: 1_000 }
	);
});
