import { deliver, drawOutages, type Deliveries, type Outage } from './delivery';
import { kerb, lot } from './grounds';
import { append, newLog, type MessageLog } from './message-log';
import { advanceNode, setHabit } from './node';
import { nodeConfig, noteEvents } from './node-config';
import { bootUp } from './node-frames';
import { newNode, type Sent } from './node-state';
import { random } from './random';
import type { Scenario } from './scenarios/types';
import { fillBays, fillLanes } from './site-life';
import type { SitePlan } from './site-plan';
import { weatherOfSpace } from './space-weather';
import { temperatureC } from './temperature';
import { noFacts, type Truth } from './truth';
import { makeWorld, type World } from './world';

/** Something the server's people would do: place a node, accept its reference. */
export interface PlannedAct {
	nodeIndex: number;
	atMs: number;
	kind: 'place' | 'accept';
	/** Accepted by rule (`preCommissioned`), not by a person. */
	byRule: boolean;
}

export interface Generated {
	scenario: Scenario;
	seed: number;
	plan: SitePlan;
	/** What each node sent, and what of it reached the server when; by node index. */
	logs: MessageLog[];
	deliveries: Deliveries[];
	acts: PlannedAct[];
	truth: Truth;
}

const MINUTE_MS = 60_000;
const DAY_MS = 86_400_000;
/** Monday 2 March 2026, 00:00 UTC: inside the model years of WMM2025. */
const START_MS = Date.UTC(2026, 2, 2);
/** Learning: reporting every 2 s for so long, then a person accepts (method 3). */
const LEARNING_MS = 4 * MINUTE_MS;
const COMMISSIONED_MS = 12 * MINUTE_MS;
const LEAST_DELTA_MG = 8;
const DELTA_SIGMAS = 8;
/** Lost bursts: a node that never bursts sends what would be heard of it. */
const NEVER_MG = 65_535;

/**
 * Invents a site's life after a scenario, wholly determined by the seed, without a network:
 *
 *   plan    geometry; `plan.nodes[i]` has metres east and north, `plan.bays[node.bayIndex].row`
 *   logs    what each node sent (frames rebuilt by `frameOf`); `inEventOrder` and `inArrivalOrder`
 *           (items.ts) give rows {nodeIndex, atMs, boot, seq, row, counts, polarity, tempC} and pulses
 *   acts    place at the start, accept when learned
 *   truth   stays per bay, everything else that happened, and figures of what the data hold
 *
 * The first 12 minutes are commissioning; grade from `truth.judgedFromMs` on.
 */
export function generate(scenario: Scenario, seed: number): Generated {
	const plan = scenario.ground === 'lot' ? lot(seed) : kerb(seed);
	const fromMs = START_MS;
	const toMs = fromMs + scenario.days * DAY_MS;
	const judgedFromMs = fromMs + COMMISSIONED_MS;
	const truth: Truth = { fromMs, judgedFromMs, toMs, stays: [], incidents: [], facts: noFacts() };
	const variation = weatherOfSpace(scenario, seed, truth);
	const world = makeWorld(plan, variation, fromMs, seed);
	const { acts, underVehicle } = commissioning(scenario, seed, plan);
	fillBays(world, scenario, seed, truth, underVehicle);
	fillLanes(world, scenario, seed, truth);
	const logs = plan.nodes.map((_, index) => liveNode(world, scenario, seed, index, truth));
	const deliveries = logs.map((log, index) => {
		const rng = random(seed, 'network', index);
		const outages = drawOutages(rng, scenario.network, judgedFromMs, toMs);
		noteOutages(truth, index, outages);
		return deliver(log, scenario.network, outages, judgedFromMs, rng, truth.facts);
	});
	truth.incidents.sort((a, b) => a.atMs - b.atMs);
	return { scenario, seed, plan, logs, deliveries, acts, truth };
}

function noteOutages(truth: Truth, nodeIndex: number, outages: readonly Outage[]): void {
	for (const { fromMs, toMs } of outages) {
		truth.incidents.push({ nodeIndex, kind: 'outage', atMs: fromMs, toMs, mg: 0 });
	}
}

function commissioning(scenario: Scenario, seed: number, plan: SitePlan) {
	const rng = random(seed, 'commissioning');
	const underVehicle = new Set<number>();
	const acts = plan.nodes.flatMap((node, nodeIndex): PlannedAct[] => {
		const byRule = rng.chance(scenario.commissioning.byRuleShare);
		if (byRule && rng.chance(scenario.commissioning.underVehicleShare)) {
			underVehicle.add(node.bayIndex);
		}
		const place: PlannedAct = { nodeIndex, atMs: START_MS, kind: 'place', byRule };
		if (byRule) return [place];
		return [place, { nodeIndex, atMs: START_MS + LEARNING_MS, kind: 'accept', byRule }];
	});
	return { acts, underVehicle };
}

/** One node's whole life; what it sent, in its order. */
function liveNode(
	world: World,
	scenario: Scenario,
	seed: number,
	index: number,
	truth: Truth
): MessageLog {
	const config = nodeConfig(world, scenario, seed, index, truth);
	noteEvents(truth, config);
	const node = newNode(config, world.fields[index]!, truth.fromMs);
	const log = newLog(config.clockOffsetMs);
	const out = (sent: Sent) => append(log, sent);
	bootUp(node, truth.fromMs, 'power', out);
	advanceNode(node, truth.fromMs + LEARNING_MS, out);
	const quietMg = Math.max(LEAST_DELTA_MG, Math.ceil(DELTA_SIGMAS * config.sensor.noiseMg));
	const deltaMg = scenario.network.heartbeatsOnly ? NEVER_MG : quietMg;
	setHabit(node, { periodS: scenario.periodS, deltaMg }, truth.fromMs + LEARNING_MS);
	advanceNode(node, truth.toMs, out);
	for (let atMs = truth.fromMs; atMs < truth.toMs; atMs += 1_800_000) {
		const tempC = temperatureC(config.course, atMs);
		truth.facts.coldestC = Math.min(truth.facts.coldestC, tempC);
		truth.facts.warmestC = Math.max(truth.facts.warmestC, tempC);
	}
	truth.facts.rows += log.rows;
	return log;
}
