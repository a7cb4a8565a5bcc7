import type { Vec3 } from '$lib/magnetics/vector';
import { random, type Random } from './random';
import { nextVisit, type BayLife, type Visit } from './schedule';
import type { Scenario } from './scenarios/types';
import { drawPass, drawQueue } from './traffic';
import type { Incident, Stay, Truth } from './truth';
import { addTraffic, addVisit, laneNodesNedM, type World } from './world';

const DAY_MS = 86_400_000;
const TOGETHER_MS = 10_000;
/** Nodes within this of a bay's own may feel its vehicle. */
const BESIDE_M = 8;
/** A bay that learns under a vehicle was entered this long before, or less. */
const EARLIER_MS = 4 * 3_600_000;

const apartM = (a: Vec3, b: Vec3): number => Math.hypot(a[0] - b[0], a[1] - b[1]);

function noteStay(truth: Truth, stay: Stay, gapS: number): void {
	const { facts } = truth;
	truth.stays.push(stay);
	if (stay.fromMs >= truth.toMs) return;
	facts.stays++;
	facts.leastVehicleMg = Math.min(facts.leastVehicleMg, stay.sizeMg);
	facts.mostVehicleMg = Math.max(facts.mostVehicleMg, stay.sizeMg);
	const staidS = (stay.toMs - stay.fromMs) / 1000;
	facts.shortestStayS = Math.min(facts.shortestStayS, staidS);
	facts.longestStayS = Math.max(facts.longestStayS, staidS);
	facts.shortestGapS = Math.min(facts.shortestGapS, gapS);
}

/** Bays are free during commissioning, but for those that learn under a vehicle. */
export function fillBays(
	world: World,
	scenario: Scenario,
	seed: number,
	truth: Truth,
	underVehicle: ReadonlySet<number>
): void {
	const bays = world.plan.bays.map((bay, bayIndex): BayLife => {
		const lane = world.plan.lanes.find((candidate) => candidate.row === bay.row)!;
		const nodeNedM = world.fields[world.nodeOfBay[bayIndex]!]!.positionNedM;
		const { earthUnit } = world;
		const besideNedM = world.fields
			.map((field) => field.positionNedM)
			.filter((at) => at !== nodeNedM && apartM(at, nodeNedM) < BESIDE_M);
		const rng = random(seed, 'bay', bayIndex);
		const freeFromMs = underVehicle.has(bayIndex) ? truth.fromMs - EARLIER_MS : truth.judgedFromMs;
		const { life } = scenario;
		return {
			bayIndex,
			bay,
			lane,
			nodeNedM,
			besideNedM,
			earthUnit,
			life,
			rng,
			freeFromMs,
			pins: []
		};
	});
	const together = random(seed, 'together');
	for (const bay of bays) {
		let lastMs = bay.freeFromMs;
		while (bay.freeFromMs < truth.toMs) {
			const visit = nextVisit(bay);
			if (visit.pinned) truth.facts.together++;
			const neighbour = bays[bay.bayIndex + 1];
			const beside = neighbour?.bay.row === bay.bay.row ? neighbour : undefined;
			pinNeighbour(visit, beside, scenario.togetherShare, together);
			const { stay, echoes } = addVisit(world, visit);
			noteStay(truth, stay, (stay.fromMs - lastMs) / 1000);
			noteEchoes(truth, echoes);
			if (stay.fromMs < truth.fromMs && stay.toMs > truth.judgedFromMs) {
				truth.facts.learnedUnderVehicle++;
			}
			lastMs = stay.toMs;
		}
	}
}

/** Now and then the next bay fills within ten seconds of this one: its neighbours must be told apart. */
function pinNeighbour(
	visit: Visit,
	neighbour: BayLife | undefined,
	share: number,
	rng: Random
): void {
	if (neighbour === undefined || !rng.chance(share)) return;
	neighbour.pins.push(Math.round(visit.fromMs + rng.between(-TOGETHER_MS, TOGETHER_MS)));
}

function noteEchoes(truth: Truth, echoes: readonly Incident[]): void {
	for (const echo of echoes) {
		truth.incidents.push(echo);
		truth.facts.mostEchoMg = Math.max(truth.facts.mostEchoMg, echo.mg);
		if (echo.mg > 30) truth.facts.echoesOver30Mg++;
	}
}

export function fillLanes(world: World, scenario: Scenario, seed: number, truth: Truth): void {
	const { facts } = truth;
	for (const lane of world.plan.lanes) {
		const nodes = laneNodesNedM(world, lane);
		const rng = random(seed, 'lane', lane.row);
		const note = (incidents: Incident[]) => {
			for (const incident of incidents) {
				truth.incidents.push(incident);
				if (incident.kind === 'pass') {
					facts.mostPassMg = Math.max(facts.mostPassMg, incident.mg);
					if (incident.mg > 20) facts.passesOver20Mg++;
				} else if (incident.mg > 20) facts.queueLevelsOver20Mg++;
			}
		};
		const { traffic, queues } = scenario;
		for (const atMs of arrivals(rng, truth, traffic === null ? 0 : traffic.perHour * 24)) {
			note(addTraffic(world, [drawPass(rng, lane, nodes, traffic!, world.earthUnit, atMs)], []));
		}
		for (const atMs of arrivals(rng, truth, queues?.perDay ?? 0)) {
			const queue = drawQueue(rng, lane, nodes, queues!, world.earthUnit, atMs);
			note(addTraffic(world, queue.moves, queue.standings));
		}
	}
}

function arrivals(rng: Random, truth: Truth, perDay: number): number[] {
	const times: number[] = [];
	if (perDay <= 0) return times;
	let atMs = truth.judgedFromMs + rng.exponential(DAY_MS / perDay);
	while (atMs < truth.toMs) {
		times.push(Math.round(atMs));
		atMs += rng.exponential(DAY_MS / perDay);
	}
	return times;
}
