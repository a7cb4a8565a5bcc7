import { expect, test } from 'vitest';
import type { NodeView } from '$lib/detection/types';
import { BUILT_IN_PROFILES } from '$lib/magnetics/sensor-profile';
import { freshLive, type NodeEntry } from './node-entry';
import { changeBetween, confidenceStep, shownOf } from './shown';

const profile = BUILT_IN_PROFILES[0]!;
const view: NodeView = {
	state: 'occupied',
	sinceMs: 1_000,
	confidence: 0.95,
	moving: false,
	doubt: null,
	conditions: ['in_service'],
	lastKnown: null,
	evidence: { because: ['stands beside {node:2}'], against: [] },
	fieldMg: null,
	baselineMg: null,
	provisional: false,
	offsetMg: null,
	disturbanceMg: null,
	onMg: 35,
	offMg: 25,
	sigmaMg: 0.5
};

function entry(): NodeEntry {
	return {
		id: 1,
		serial: 'NODE-0001',
		config: {
			siteId: 1,
			bayId: 3,
			bayCode: 'A-1',
			profile,
			range: { min: -1, max: 1 },
			keys: [],
			unsignedAllowed: false,
			periodS: 60,
			deltaMg: 8,
			usualPeriodS: 60,
			placedAtMs: 1,
			withdrawnAtMs: null,
			spells: [],
			member: null
		},
		live: freshLive()
	};
}
const show = (of: NodeEntry, what: Partial<NodeView> = {}) =>
	shownOf(of, 3, { ...view, ...what }, (id) => (id === 2 ? 'A-2' : null));

test('evidence names the bay, not the node', () => {
	expect(show(entry()).evidence).toBe('{"because":["stands beside bay A-2"],"against":[]}');
});

test('silent over detection: the condition, then the state once the grace time told it', () => {
	const node = entry();
	node.live.silence.silent = true;
	expect(show(node)).toMatchObject({ state: 'occupied', condition: 'silent', confidence20: 19 });
	node.live.silence.unknown = { eventId: 5, atMs: 9_000 };
	node.live.pointer = { atMs: 8_000, boot: 1, seq: 1, row: 0 };
	expect(show(node)).toMatchObject({
		state: 'unknown',
		sinceMs: 9_000,
		confidence20: null,
		lastKnownState: 'occupied',
		lastKnownAtMs: 8_000
	});
});

test('a more serious condition of detection does not hide that the node is silent', () => {
	const node = entry();
	node.live.silence.silent = true;
	expect(show(node, { conditions: ['refresh_due', 'drifting'] })).toMatchObject({
		condition: 'silent',
		also: 'refresh_due,drifting'
	});
});

test('a cell at the floor does not flicker: low below it, good again 50 mV above', () => {
	const node = entry();
	const also = (batteryMv: number) => {
		node.live.batteryMv = batteryMv;
		const now = show(node);
		node.live.shown = now;
		return now.also;
	};
	const floor = profile.batteryFloorMv;
	expect([floor, floor - 1, floor + 49, floor + 50].map(also)).toEqual([
		'',
		'low_cell',
		'low_cell',
		''
	]);
});

test('confidence moves in twentieths and only when it has clearly left its step', () => {
	expect(confidenceStep(0.9, null)).toBe(18);
	expect(confidenceStep(0.93, 18)).toBe(18);
	expect(confidenceStep(0.94, 18)).toBe(19);
	expect(confidenceStep(0.87, 18)).toBe(18);
	expect(confidenceStep(0.86, 18)).toBe(17);
	expect(confidenceStep(null, 18)).toBeNull();
});

test('what a reader cannot see is no change', () => {
	const before = show(entry());
	expect(changeBetween(before, { ...before, evidence: 'other figures' })).toBeNull();
	expect(changeBetween(before, { ...before, also: 'low_cell' })).toBe('condition');
	expect(changeBetween(before, { ...before, state: 'vacant', also: 'low_cell' })).toBe('bay');
	expect(changeBetween(null, before)).toBe('bay');
});

test('a movement that is not yet judged is no change of the bay, and what comes of it is', () => {
	const seen = entry();
	seen.live.shown = show(seen);
	const moving = show(seen, { confidence: 0.37, moving: true });
	expect(changeBetween(seen.live.shown, moving)).toBeNull();
	expect(changeBetween(seen.live.shown, show(seen, { confidence: 0.37 }))).toBe('bay');
	const gone = show(seen, { state: 'vacant', sinceMs: 2_000, confidence: 0.5, moving: true });
	expect(changeBetween(seen.live.shown, gone)).toBe('bay');
	expect(gone.confidence20).toBe(10);
});
