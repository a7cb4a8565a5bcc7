import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import {
	beats,
	BURST_MS,
	drives,
	MIN,
	plus,
	QUIET,
	READY,
	S,
	Street,
	type Reading
} from './rows.fixture';

const CAR: Vec3 = [60, 90, -80];
const OFFSET: Vec3 = [30, -20, 10];

/** A street whose node has had its pair: direction is known. */
function withPair(): Street {
	const street = new Street();
	street.offsetMg = OFFSET;
	street.commission();
	street.pulse(READY, {
		setMg: plus(QUIET, OFFSET),
		resetMg: [OFFSET[0] - QUIET[0], OFFSET[1] - QUIET[1], OFFSET[2] - QUIET[2]],
		before: { polarity: 1, rawMg: plus(QUIET, OFFSET) },
		afterMg: plus(QUIET, OFFSET)
	});
	street.play(beats(1, READY + MIN, READY + 10 * MIN, QUIET));
	return street;
}
const START = READY + 10 * MIN;
const flipped = (v: Vec3, s: Vec3): Vec3 => [v[0] * s[0], v[1] * s[1], v[2] * s[2]];

describe('inverted film', () => {
	test.each<[string, Vec3]>([
		['the whole film', [-1, -1, -1]],
		['x alone', [-1, 1, 1]],
		['y alone', [1, -1, 1]],
		['z alone', [1, 1, -1]],
		['x and z', [-1, 1, -1]]
	])(
		'%s turns over while vacant: never an arrival, film refresh due, field re-signed',
		(_, signs) => {
			const street = withPair();
			street.play(beats(1, START, START + 10 * MIN, flipped(QUIET, signs)));
			expect(street.moves()).toEqual([]);
			expect(street.view()).toMatchObject({
				state: 'vacant',
				conditions: ['inverted', 'refresh_due']
			});
			expect(street.view().disturbanceMg).toBeLessThan(5);
		}
	);

	test('after the flip a vehicle still arrives and departs', () => {
		const street = withPair();
		const of = (v: Vec3) => flipped(v, [-1, -1, -1]);
		const taken = plus(QUIET, CAR);
		street.play(
			beats(1, START, START + 10 * MIN, of(QUIET)),
			drives(1, START + 10 * MIN, of(QUIET), of(taken)),
			beats(1, START + 11 * MIN, START + 20 * MIN, of(taken)),
			drives(1, START + 20 * MIN, of(taken), of(QUIET)),
			beats(1, START + 21 * MIN, START + 25 * MIN, of(QUIET))
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});

	test('a film that flips under a vehicle is no departure', () => {
		const street = withPair();
		const taken = plus(QUIET, CAR);
		street.play(
			drives(1, START, QUIET, taken),
			beats(1, START + MIN, START + 10 * MIN, taken),
			beats(1, START + 10 * MIN, START + 20 * MIN, flipped(taken, [-1, -1, -1]))
		);
		expect(street.moves()).toEqual(['arrival']);
		expect(street.view().conditions).toEqual(['inverted', 'refresh_due']);
	});

	test('a pulse turns the film back: signs and film refresh are clear', () => {
		const street = withPair();
		const turned = flipped(QUIET, [-1, -1, -1]);
		street.play(beats(1, START, START + 10 * MIN, turned));
		street.pulse(START + 10 * MIN, {
			setMg: plus(QUIET, OFFSET),
			resetMg: plus(turned, OFFSET),
			before: { polarity: 1, rawMg: plus(turned, OFFSET) },
			afterMg: plus(QUIET, OFFSET)
		});
		street.play(beats(1, START + 11 * MIN, START + 20 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view()).toMatchObject({ state: 'vacant', conditions: ['in_service'] });
		expect(street.view().disturbanceMg).toBeLessThan(5);
	});

	test('without a pair there is no direction: the rule on inverted film is off', () => {
		const street = new Street().commission();
		street.play(beats(1, READY, READY + 10 * MIN, flipped(QUIET, [-1, -1, -1])));
		expect(street.view().conditions).toEqual(['in_service']);
		expect(street.view().offsetMg).toBeNull();
	});

	test('an axis that carries less than 50 mG does not show its sign', () => {
		const flat: Vec3 = [20, 10, 420];
		const street = new Street();
		street.commission('person', flat);
		street.group.nodes[0]!.slow.offset = [0, 0, 0];
		street.play(beats(1, READY, READY + 10 * MIN, [-20, -10, 420]));
		expect(street.view().conditions).toEqual(['in_service']);
	});
});

describe('magnet', () => {
	/** A magnet held over the node for 3 s: clipped rows, then a weakened film. */
	function magnet(street: Street, fromMs: number, left: Vec3): void {
		const over: Reading[] = beats(1, fromMs, fromMs + 3 * S, [7999, 7999, 7999], BURST_MS).map(
			(r) => ({
				...r,
				clipped: true
			})
		);
		street.play(over, beats(1, fromMs + 3 * S, fromMs + 10 * S, left, BURST_MS));
	}

	test('a clipped burst leaves the state, makes the bay doubtful and asks for a film refresh', () => {
		const street = withPair();
		const weak: Vec3 = [QUIET[0] * 0.8, QUIET[1] * 0.8, QUIET[2] * 0.8];
		magnet(street, START, weak);
		street.play(beats(1, START + MIN, START + 10 * MIN, weak));
		expect(street.moves()).toEqual([]);
		expect(street.view()).toMatchObject({ state: 'vacant', conditions: ['refresh_due'] });
		expect(street.view().doubt?.reason).toBe('magnet');
	});

	test('rows over the film’s limit count as a magnet although nothing clipped', () => {
		const street = withPair();
		const weak: Vec3 = [QUIET[0] * 0.8, QUIET[1] * 0.8, QUIET[2] * 0.8];
		street.play(
			beats(1, START, START + 3 * S, [4500, 0, 0], BURST_MS),
			beats(1, START + 3 * S, START + 10 * S, weak, BURST_MS)
		);
		expect(street.moves()).toEqual([]);
		expect(street.view().doubt?.reason).toBe('magnet');
	});

	test('a magnet under a standing vehicle leaves the bay taken', () => {
		const street = withPair();
		const taken = plus(QUIET, CAR);
		street.play(drives(1, START, QUIET, taken), beats(1, START + MIN, START + 5 * MIN, taken));
		const weak: Vec3 = [taken[0] * 0.85, taken[1] * 0.85, taken[2] * 0.85];
		magnet(street, START + 5 * MIN, weak);
		street.play(beats(1, START + 6 * MIN, START + 10 * MIN, weak));
		expect(street.moves()).toEqual(['arrival']);
		expect(street.view()).toMatchObject({ state: 'occupied' });
		expect(street.view().doubt?.reason).toBe('magnet');
	});

	test('a magnet that leaves no trace moves no state', () => {
		const street = withPair();
		magnet(street, START, QUIET);
		expect(street.moves()).toEqual([]);
		expect(street.view().state).toBe('vacant');
	});

	test('one clipped row that leaves no trace still makes a film refresh due, until a pulse', () => {
		const street = withPair();
		const clipped = { nodeId: 1, atMs: START, fieldMg: [8000, 0, 0] as Vec3, clipped: true };
		street.play([clipped], beats(1, START + S, START + 10 * MIN, QUIET));
		expect(street.view().conditions).toEqual(['refresh_due']);
		street.pulse(START + 10 * MIN);
		expect(street.view().conditions).toEqual(['in_service']);
	});

	test('the next pulse heals the film and ends the magnet’s doubt', () => {
		const street = withPair();
		const weak: Vec3 = [QUIET[0] * 0.8, QUIET[1] * 0.8, QUIET[2] * 0.8];
		magnet(street, START, weak);
		street.play(beats(1, START + MIN, START + 10 * MIN, weak));
		street.pulse(START + 10 * MIN, {
			source: 'ack',
			before: { polarity: 1, rawMg: plus(weak, OFFSET) },
			afterMg: plus(QUIET, OFFSET)
		});
		street.play(beats(1, START + 11 * MIN, START + 20 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view()).toMatchObject({ doubt: null, conditions: ['in_service'] });
	});

	test('an axle over the limit for one row is no magnet: the vehicle arrives', () => {
		const street = withPair();
		const rows = drives(1, START, QUIET, plus(QUIET, CAR), [300, 4100, 500]);
		street.play(rows, beats(1, START + MIN, START + 5 * MIN, plus(QUIET, CAR)));
		expect(street.moves()).toEqual(['arrival']);
		expect(street.view().doubt).toBeNull();
	});
});
