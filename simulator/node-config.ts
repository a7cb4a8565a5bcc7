import { signedRange } from '$lib/magnetics/counts';
import { builtInProfile } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';
import { drawMisfortunes } from './misfortunes';
import type { NodeConfig } from './node-state';
import { random } from './random';
import type { Scenario } from './scenarios/types';
import { nodeCourse, type Weather } from './temperature';
import type { Truth } from './truth';
import type { World } from './world';

/** While placing, learning and proving the server sets a period of 2 s (method 3). */
const LEARNING_HABIT = { periodS: 2, deltaMg: 8 };

/** Draws one node's sensor, clock, temperature course and misfortunes. */
export function nodeConfig(
	world: World,
	scenario: Scenario,
	seed: number,
	index: number,
	truth: Truth
): NodeConfig {
	const rng = random(seed, 'config', index);
	const node = world.plan.nodes[index]!;
	const profile = builtInProfile(node.profileCode)!;
	const axes = (draw: () => number): Vec3 => [draw(), draw(), draw()];
	const weather: Weather = {
		...scenario.climate,
		lowestC: -20,
		highestC: 60,
		localOffsetMs: (world.plan.lonDeg / 15) * 3_600_000,
		seed
	};
	const noiseMg = rng.between(...scenario.noiseMg);
	const clock = rng.uniform();
	const { offShare, absentShare } = scenario.clocks;
	const off = clock < offShare;
	const clockOffsetMs = off ? (rng.chance(0.5) ? 1 : -1) * rng.between(0.9, 1.1) * 3_600_000 : 0;
	const absent = !off && clock < offShare + absentShare;
	truth.facts.noisiestMg = Math.max(truth.facts.noisiestMg, noiseMg);
	if (off) truth.facts.clocksOff++;
	if (absent) truth.facts.clocksAbsent++;
	return {
		index,
		serial: node.serial,
		profileCode: node.profileCode,
		sensor: {
			countsPerGauss: profile.countsPerGauss,
			limit: -signedRange(profile).min,
			noiseMg,
			offsetMg: axes(() => rng.between(-250, 250)),
			offsetPerC: axes(() => rng.between(-1, 1) * scenario.offsetPerC),
			kappaPerC: scenario.kappaPerC,
			referenceC: 25
		},
		course: nodeCourse(weather, index),
		events: drawMisfortunes(rng, scenario, truth.fromMs, truth.judgedFromMs, truth.toMs),
		burstHz: rng.between(...scenario.burstHz),
		habit: LEARNING_HABIT,
		batching: { rows: rng.whole(...scenario.batchRows), holdMs: 1000 },
		clockOffsetMs: absent ? null : clockOffsetMs,
		battery: { fullMv: 3620, endsFromMs: Infinity },
		firmware: '1.4.0',
		// A clock that is off can be mended only where the node says when it sent (protocol key 23).
		keys: !off && rng.chance(scenario.leastKeysShare) ? 'least' : 'full',
		seed
	};
}

/** Notes in the truth what will befall a node. */
export function noteEvents(truth: Truth, config: NodeConfig): void {
	const { facts } = truth;
	for (const event of config.events) {
		if (event.atMs >= truth.toMs) continue;
		if (event.kind === 'loss') facts.losses++;
		else if (event.kind === 'flip') facts.flips++;
		else if (event.kind === 'magnet') facts.magnets++;
		else if (event.kind === 'reboot') facts.reboots++;
		else if (event.kind === 'offset') {
			if (event.toMs > event.atMs) facts.offsetCreeps++;
			else facts.offsetSteps++;
		} else if (event.kind !== 'pulse') facts.works++;
		else if (event.verb === 'pair') facts.pairs++;
		else if (event.verb === 'reset') facts.resets++;
		const toMs = 'toMs' in event ? event.toMs : event.atMs;
		const mg = 'byMg' in event ? Math.hypot(...event.byMg) : 0;
		truth.incidents.push({ nodeIndex: config.index, kind: event.kind, atMs: event.atMs, toMs, mg });
	}
}
