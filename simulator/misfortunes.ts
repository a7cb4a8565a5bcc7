import type { Vec3 } from '$lib/magnetics/vector';
import type { NodeEvent } from './film';
import type { Random } from './random';
import type { Scenario } from './scenarios/types';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const WEEK_MS = 7 * DAY_MS;
/** The first pair comes while the reference is learned (the server asks for one then, method 3). */
const FIRST_PAIR_MS = 60_000;

function* poisson(rng: Random, fromMs: number, toMs: number, perWeek: number): Generator<number> {
	if (perWeek <= 0) return;
	for (
		let atMs = fromMs + rng.exponential(WEEK_MS / perWeek);
		atMs < toMs;
		atMs += rng.exponential(WEEK_MS / perWeek)
	) {
		yield Math.round(atMs);
	}
}

const direction = (rng: Random, size: number): Vec3 => {
	const v: [number, number, number] = [rng.normal(), rng.normal(), rng.normal()];
	const norm = Math.hypot(...v);
	return [(v[0] / norm) * size, (v[1] / norm) * size, (v[2] / norm) * size];
};

function filmEvents(rng: Random, scenario: Scenario, fromMs: number, toMs: number): NodeEvent[] {
	const { film } = scenario;
	const events: NodeEvent[] = [];
	const refresh = (atMs: number) =>
		events.push({
			kind: 'pulse',
			verb: 'pair',
			atMs: Math.round(atMs + rng.between(...film.refreshAfterH) * HOUR_MS)
		});
	if (rng.chance(film.lossShare)) {
		const atMs = fromMs + rng.between(0, 0.3) * DAY_MS;
		const remaining = [0, 1, 2].map(() => rng.between(film.lossRemaining, 1)) as unknown as Vec3;
		events.push({ kind: 'loss', atMs, toMs: atMs + film.lossDays * DAY_MS, remaining });
	}
	for (const atMs of poisson(rng, fromMs, toMs, film.flipsPerWeek)) {
		const axes = rng.chance(0.5) ? ([0, 1, 2] as const) : [rng.pick([0, 1, 2] as const)];
		events.push({ kind: 'flip', atMs, axes });
		refresh(atMs);
	}
	for (const atMs of poisson(rng, fromMs, toMs, film.magnetsPerWeek)) {
		const leaves = [0, 1, 2].map(() => rng.between(-0.8, 0.9)) as unknown as Vec3;
		const durationMs = rng.between(1500, 6000);
		events.push({ kind: 'magnet', atMs, durationMs, peakMg: rng.between(9000, 20000), leaves });
		refresh(atMs);
	}
	return events;
}

function offsetEvents(rng: Random, scenario: Scenario, fromMs: number, toMs: number): NodeEvent[] {
	const { offset } = scenario;
	const events: NodeEvent[] = [];
	for (const atMs of poisson(rng, fromMs, toMs, offset.stepsPerWeek)) {
		const byMg = direction(rng, offset.stepMg * rng.between(0.4, 1));
		events.push({ kind: 'offset', atMs, toMs: atMs, byMg });
	}
	if (rng.chance(offset.creepShare)) {
		const weeks = (toMs - fromMs) / WEEK_MS;
		const byMg = direction(rng, offset.creepMgPerWeek * weeks);
		events.push({ kind: 'offset', atMs: fromMs, toMs, byMg });
	}
	return events;
}

function pulseEvents(rng: Random, scenario: Scenario, fromMs: number, toMs: number): NodeEvent[] {
	const events: NodeEvent[] = [{ kind: 'pulse', verb: 'pair', atMs: fromMs + FIRST_PAIR_MS }];
	const everyMs = scenario.pairEveryH * HOUR_MS;
	for (let atMs = fromMs + everyMs * rng.between(0.2, 1); atMs < toMs; atMs += everyMs) {
		events.push({ kind: 'pulse', verb: 'pair', atMs: Math.round(atMs) });
	}
	for (const atMs of poisson(rng, fromMs + HOUR_MS, toMs, scenario.resetsPerWeek)) {
		const backMs = Math.round(atMs + rng.between(1, 8) * HOUR_MS);
		events.push(
			{ kind: 'pulse', verb: 'reset', atMs },
			{ kind: 'pulse', verb: 'set', atMs: backMs }
		);
	}
	return events;
}

/** Everything that befalls one node after commissioning, and its first pair; sorted by time. */
export function drawMisfortunes(
	rng: Random,
	scenario: Scenario,
	startMs: number,
	judgedFromMs: number,
	toMs: number
): NodeEvent[] {
	const events = [
		...pulseEvents(rng, scenario, startMs, toMs),
		...filmEvents(rng, scenario, judgedFromMs, toMs),
		...offsetEvents(rng, scenario, judgedFromMs, toMs)
	];
	for (const atMs of poisson(rng, judgedFromMs, toMs, scenario.rebootsPerWeek)) {
		const cause = rng.pick(['watchdog', 'brown-out', 'power']);
		const offMs = Math.round(rng.between(1500, 240_000));
		events.push({ kind: 'reboot', atMs, offMs, cause });
	}
	for (const atMs of poisson(rng, judgedFromMs, toMs, scenario.worksPerWeek)) {
		if (rng.chance(0.5)) events.push({ kind: 'surroundings', atMs, byMg: direction(rng, 25) });
		else {
			const [rollDeg, pitchDeg] = [rng.between(-3, 3), rng.between(-3, 3)];
			events.push({ kind: 'tilt', atMs, rollDeg, pitchDeg });
		}
	}
	return events.sort((a, b) => a.atMs - b.atMs);
}
