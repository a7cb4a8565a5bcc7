import { describe, expect, test } from 'vitest';
import { takeCommand, REMEMBERED, type Obeyed } from './commands';
import type { NodeEvent } from './film';
import { recordedSeries } from './geomagnetic';
import { advanceNode, setHabit } from './node';
import { nodeField } from './node-field';
import { bootUp, firePulse } from './node-frames';
import { newNode, type NodeConfig, type NodeState, type Sent } from './node-state';
import { nodeCourse } from './temperature';
import type { CommandFrame, ReadingFrame } from '$lib/wire/types';

const T0 = Date.UTC(2026, 2, 2);
const QUIET = [180, 20, 440] as const;

function makeNode(config: Partial<NodeConfig> = {}): NodeState {
	const weather = {
		meanC: 25,
		halfSwingC: 0,
		spellC: 0,
		cloudC: 0,
		lowestC: -20,
		highestC: 60,
		localOffsetMs: 0,
		seed: 1
	};
	const field = nodeField(
		{
			serial: 'TEST-0001',
			bayIndex: 0,
			eastM: 0,
			northM: 0,
			headingDeg: 0,
			rollDeg: 0,
			pitchDeg: 0,
			profileCode: 'amr-18-16384'
		},
		QUIET,
		recordedSeries(T0, 10)
	);
	const node = newNode(
		{
			index: 0,
			serial: 'TEST-0001',
			profileCode: 'amr-18-16384',
			sensor: {
				countsPerGauss: 16_384,
				limit: 131_072,
				noiseMg: 0,
				offsetMg: [100, -50, 25],
				offsetPerC: [0, 0, 0],
				kappaPerC: -0.003,
				referenceC: 25
			},
			course: nodeCourse(weather, 0),
			events: [],
			burstHz: 2,
			habit: { periodS: 60, deltaMg: 8 },
			batching: { rows: 1, holdMs: 500 },
			clockOffsetMs: 0,
			battery: { fullMv: 3600, endsFromMs: Infinity },
			firmware: '1.4.0',
			keys: 'full',
			seed: 1,
			...config
		},
		field,
		T0
	);
	node.boot = 2;
	bootUp(node, T0, 'power', () => undefined);
	return node;
}

function run(node: NodeState, seconds: number): Sent[] {
	const sent: Sent[] = [];
	advanceNode(node, T0 + seconds * 1000, (message) => sent.push(message));
	return sent;
}

const readings = (sent: readonly Sent[]): ReadingFrame[] =>
	sent.map(({ frame }) => frame).filter((frame) => frame.kind === 'reading');
const step = (atS: number, mg: number): NodeEvent => ({
	kind: 'surroundings',
	atMs: T0 + atS * 1000,
	byMg: [0, 0, mg]
});

describe('reporting habit (protocol)', () => {
	test('a quiet field is reported once a period', () => {
		const frames = readings(run(makeNode(), 3600));
		expect(frames).toHaveLength(60);
		frames.slice(1).forEach((frame, i) => expect(frame.t - frames[i]!.t).toBe(60_000));
	});

	test('a field that moves past delta is reported at 2 Hz until it was still for 5 s', () => {
		const frames = readings(run(makeNode({ events: [step(120, 40)] }), 240));
		const burst = frames.filter(({ t }) => t >= T0 + 119_900 && t <= T0 + 130_000);
		expect(burst.length).toBeGreaterThanOrEqual(10);
		expect(burst.length).toBeLessThanOrEqual(13);
		expect(Math.max(...frames.slice(1).map((f, i) => f.t - frames[i]!.t))).toBeLessThanOrEqual(
			60_000
		);
	});

	test('a move under delta starts no burst', () => {
		expect(readings(run(makeNode({ events: [step(120, 6)] }), 600)).length).toBe(10);
	});

	test('rows are gathered to at most 120 a message, each with its temperature when they span over 5 min', () => {
		const frames = readings(run(makeNode({ batching: { rows: 120, holdMs: Infinity } }), 4 * 3600));
		expect(frames).toHaveLength(2);
		expect(frames[0]!.rows).toHaveLength(120);
		expect(frames[0]!.rows.every(({ tempDc }) => tempDc !== null)).toBe(true);
	});

	test('a node without a clock writes 0 and no time of sending (protocol key 3)', () => {
		const [frame] = readings(run(makeNode({ clockOffsetMs: null }), 120));
		expect([frame!.t, frame!.sentMs]).toEqual([0, null]);
	});
});

describe('pulses', () => {
	test('a pair finds field and offset again, and says what it held before (protocol keys 9, 10, 20, 21)', () => {
		const node = makeNode({ events: [{ kind: 'flip', atMs: T0 + 10_000, axes: [0, 1, 2] }] });
		run(node, 30);
		const sent: Sent[] = [];
		firePulse(node, 'pair', T0 + 30_000, null, (message) => sent.push(message));
		const frame = sent.map((s) => s.frame).find((f) => f.kind === 'pair')!;
		expect(frame.kind).toBe('pair');
		if (frame.kind !== 'pair') return;
		const axis = (i: 0 | 1 | 2) => [
			((frame.set[i] - frame.reset[i]) / 2 / 16_384) * 1000,
			((frame.set[i] + frame.reset[i]) / 2 / 16_384) * 1000
		];
		// Within a count and the recorded variation of under 1 mG.
		expect(axis(2)[0]).toBeGreaterThan(439);
		expect(axis(2)[0]).toBeLessThan(441);
		expect(axis(0)[1]).toBeCloseTo(100, 0);
		// Flipped before: the bridge said -440 + 25.
		expect((frame.before!.counts[2] / 16_384) * 1000).toBeCloseTo(-415, -1);
		expect(frame.after).toEqual(frame.set);
	});

	test('a node that sends the least keys leaves before, after and pulse unsaid', () => {
		const sent: Sent[] = [];
		firePulse(makeNode({ keys: 'least' }), 'pair', T0 + 1000, null, (s) => sent.push(s));
		expect(sent[0]!.frame).toMatchObject({
			kind: 'pair',
			before: null,
			after: null,
			sentMs: null,
			pulse: null
		});
	});

	test('a boot counts up, starts anew at 0 and sets the film', () => {
		const node = makeNode();
		node.film.polarity = -1;
		const sent: Sent[] = [];
		bootUp(node, T0 + 1000, 'watchdog', (message) => sent.push(message));
		const { frame } = sent[0]!;
		expect(frame).toMatchObject({ kind: 'hello', boot: 4, seq: 0, cause: 'watchdog' });
		expect(frame.kind === 'hello' && frame.before?.polarity).toBe(-1);
		expect(node.film.polarity).toBe(1);
	});
});

describe('commands (protocol, down)', () => {
	const command = (
		verb: CommandFrame['verb'],
		id = 1,
		over: Partial<CommandFrame> = {}
	): CommandFrame => ({
		id: Uint8Array.from([0, 0, 0, 0, 0, 0, 0, id]),
		verb,
		boot: 3,
		t: T0,
		expiresMs: T0 + 60_000,
		report: verb === 'report' ? { periodS: 2, deltaMg: 9 } : null,
		...over
	});
	const give = (node: NodeState, known: Obeyed[], given: CommandFrame, stored: number[] = []) => {
		const sent: Sent[] = [];
		takeCommand(
			node,
			known,
			given,
			T0 + 5000,
			3600,
			() => stored.push(sent.length),
			(s) => sent.push(s)
		);
		return sent.map(({ frame }) => frame);
	};

	test('a pair is remembered before the pulse, fired, published and answered', () => {
		const stored: number[] = [];
		const frames = give(makeNode(), [], command('pair'), stored);
		expect(frames.map(({ kind }) => kind)).toEqual(['pair', 'ack']);
		expect(stored).toEqual([0]);
		expect(frames[1]).toMatchObject({ outcome: 0 });
	});

	test('the same id again is answered with the same outcome and fires nothing', () => {
		const node = makeNode();
		const known: Obeyed[] = [];
		give(node, known, command('set'));
		const pulses = node.pulses;
		const frames = give(node, known, command('set'));
		expect(frames.map(({ kind }) => kind)).toEqual(['ack']);
		expect(frames[0]).toMatchObject({ outcome: 0, before: null });
		expect(node.pulses).toBe(pulses);
	});

	test('an expired command and one for another boot are not obeyed', () => {
		const node = makeNode();
		expect(give(node, [], command('set', 1, { expiresMs: T0 + 4000 }))).toEqual([]);
		expect(give(node, [], command('set', 2, { boot: 2 }))).toEqual([]);
		// The power-on SET alone.
		expect(node.pulses).toBe(1);
	});

	test('without a clock only the boot guards', () => {
		const frames = give(makeNode({ clockOffsetMs: null }), [], command('set', 1, { expiresMs: 1 }));
		expect(frames.map(({ kind }) => kind)).toEqual(['ack']);
	});

	test('report changes period and delta and says so', () => {
		const node = makeNode();
		const [ack] = give(node, [], command('report'));
		expect(ack).toMatchObject({ kind: 'ack', habit: { periodS: 2, deltaMg: 9 } });
		expect(readings(run(node, 65)).length).toBe(30);
		setHabit(node, { periodS: 60, deltaMg: 8 }, T0 + 65_000);
	});

	test('reset leaves the film at -1 and the readings say so until a set', () => {
		const node = makeNode();
		give(node, [], command('reset'));
		expect(readings(run(node, 130))[0]!.polarity).toBe(-1);
		give(node, [], command('set', 2));
		expect(node.film.polarity).toBe(1);
	});

	test('the last 16 ids are kept', () => {
		const node = makeNode();
		const known: Obeyed[] = [];
		for (let id = 1; id <= 20; id++) give(node, known, command('report', id));
		expect(known).toHaveLength(REMEMBERED);
		expect(known[0]!.idHex).toBe('0000000000000005');
	});

	test('a cell too low for a pulse refuses, with the reason', () => {
		const sent: Sent[] = [];
		takeCommand(
			makeNode(),
			[],
			command('set'),
			T0,
			2400,
			() => undefined,
			(s) => sent.push(s)
		);
		expect(sent[0]!.frame).toMatchObject({
			kind: 'ack',
			outcome: 1,
			reason: 'cell too low for a pulse'
		});
	});
});
