import { describe, expect, test } from 'vitest';
import { bays, beats, drives, MIN, plus, QUIET, READY, S, Street, times } from './rows.fixture';

/** A vehicle waiting in the aisle, felt at two bays of the row that do not hear each other: under 2 on. */
const LOW = plus(QUIET, [0, 0, 50]);
const LIKE = plus(QUIET, [40, 0, 20]);

function row(): Street {
	const [a, b] = bays(2);
	return new Street([a!, { ...b!, eastM: 10 }]).commission();
}

function queueStands(street: Street, untilMin: number): void {
	street.play(
		drives(1, READY, QUIET, LOW, LOW),
		drives(2, READY + 8 * S, QUIET, LIKE, LIKE),
		...[1, 2].map((id) =>
			beats(id, READY + 30 * S, READY + untilMin * MIN, id === 1 ? LOW : LIKE, 10 * S)
		)
	);
}

describe('queue in the aisle', () => {
	test('like low levels within 20 s at one row keep the state, with confidence of 0.6 at most', () => {
		const street = row();
		queueStands(street, 4);
		for (const id of [1, 2]) {
			expect(street.moves(id)).toEqual([]);
			expect(street.view(id).state).toBe('vacant');
			expect(street.view(id).confidence).toBeLessThanOrEqual(0.6);
		}
	});

	test('a queue that drives on has left no arrival', () => {
		const street = row();
		queueStands(street, 4);
		const t = READY + 4 * MIN;
		street.play(
			drives(1, t, LOW, QUIET, QUIET),
			drives(2, t + 4 * S, LIKE, QUIET, QUIET),
			...[1, 2].map((id) => beats(id, t + MIN, t + 20 * MIN, QUIET))
		);
		for (const id of [1, 2]) expect(street.moves(id)).toEqual([]);
		for (const id of [1, 2]) expect(street.view(id).confidence).toBeGreaterThan(0.9);
	});

	test('what outlasts 10 min is parked, since its own time', () => {
		const street = row();
		queueStands(street, 12);
		for (const id of [1, 2]) expect(street.moves(id)).toEqual(['arrival']);
		const said = street.entries(1).at(-1)!;
		expect(said.atMs).toBeLessThan(READY + 3 * S);
		expect(said.decidedAtMs).toBeGreaterThanOrEqual(READY + 10 * MIN);
		expect(said.evidence.because.join()).toContain('stayed when the queue had moved on');
	});

	test('a level of 4 on is no queue, whatever its row does', () => {
		const street = row();
		const high = plus(QUIET, [60, 90, -100]);
		street.play(
			drives(1, READY, QUIET, high),
			drives(2, READY + 8 * S, QUIET, LIKE, LIKE),
			...[1, 2].map((id) =>
				beats(id, READY + 30 * S, READY + 3 * MIN, id === 1 ? high : LIKE, 10 * S)
			)
		);
		expect(street.moves(1)).toEqual(['arrival']);
	});

	test('a low level alone in its row arrives once no like step can come any more', () => {
		const street = row();
		street.play(
			drives(1, READY, QUIET, LOW, LOW),
			...[1, 2].map((id) =>
				beats(id, READY + 10 * S, READY + 3 * MIN, id === 1 ? LOW : QUIET, 10 * S)
			)
		);
		expect(street.moves(1)).toEqual(['arrival']);
		expect(street.entries(1).at(-1)!.decidedAtMs).toBeLessThanOrEqual(READY + 90 * S);
	});

	test('steps that differ by more than a factor of 2.5 are no queue', () => {
		const street = row();
		const large = plus(QUIET, [100, 100, 0]);
		street.play(
			drives(1, READY, QUIET, LOW, LOW),
			drives(2, READY + 8 * S, QUIET, large),
			...[1, 2].map((id) =>
				beats(id, READY + 30 * S, READY + 3 * MIN, id === 1 ? LOW : large, 10 * S)
			)
		);
		expect(street.moves(1)).toEqual(['arrival']);
	});
});

test('what stays when the like step elsewhere in the row is undone is parked, since its own time', () => {
	const street = row();
	queueStands(street, 4);
	const t = READY + 4 * MIN;
	street.play(
		drives(2, t, LIKE, QUIET, QUIET),
		beats(2, t + 30 * S, t + 4 * MIN, QUIET, 10 * S),
		beats(1, t, t + 4 * MIN, LOW, 10 * S)
	);
	expect(street.moves(2)).toEqual([]);
	expect(street.moves(1)).toEqual(['arrival']);
	expect(street.entries(1).at(-1)?.atMs).toBeLessThan(READY + 3 * S);
});

describe('a kerb: no other node of the row within reach', () => {
	/** Steel beside the node: the induced dipole takes from the vertical (−m/r³ where it adds 2m/r³ above). */
	const BESIDE = plus(QUIET, [25, 0, -35]);
	const OVER = plus(QUIET, [25, 0, 35]);
	const COMES = READY + 2 * MIN;

	function kerb(): Street {
		const street = new Street().commission();
		street.pulse(READY, { setMg: QUIET, resetMg: times(QUIET, -1) });
		return street;
	}

	function stands(street: Street, level: typeof QUIET, forMin: number, peak = level): void {
		const leavesMs = COMES + forMin * MIN;
		street.play(
			beats(1, READY + 5 * S, COMES, QUIET, 10 * S),
			drives(1, COMES, QUIET, level, peak),
			beats(1, COMES + 30 * S, leavesMs, level, 10 * S),
			drives(1, leavesMs, level, QUIET, QUIET),
			beats(1, leavesMs + MIN, leavesMs + 15 * MIN, QUIET)
		);
	}

	test('what halts beside the node for minutes and weakens the vertical is no arrival', () => {
		const street = kerb();
		stands(street, BESIDE, 5);
		expect(street.moves()).toEqual([]);
		expect(street.view().state).toBe('vacant');
	});

	test('the same for over 10 min is parked, since its own time', () => {
		const street = kerb();
		stands(street, BESIDE, 12);
		expect(street.moves()).toEqual(['arrival', 'departure']);
		expect(street.entries().find((e) => e.type === 'arrival')!.atMs).toBeLessThan(COMES + 3 * S);
	});

	test('what adds to the vertical stands over the node and arrives at once', () => {
		const street = kerb();
		stands(street, OVER, 5);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});

	test('an axle’s peak on the way shows a vehicle in the bay', () => {
		const street = kerb();
		stands(street, BESIDE, 5, plus(QUIET, [90, 60, -80]));
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});

	test('without a pair the sign of the vertical is not known: it arrives', () => {
		const street = new Street().commission();
		stands(street, BESIDE, 5);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});
});
