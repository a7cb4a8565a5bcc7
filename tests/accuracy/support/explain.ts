import type { Generated } from '../../../simulator/generate';
import type { Incident } from '../../../simulator/truth';

const NEAR_MS = 300_000;
const END_NEAR_MS = 120_000;
const MOST = 8;

const signed = (value: number): string => `${value >= 0 ? '+' : ''}${value.toFixed(0)}`;
const sinceS = (ms: number, atMs: number): string => signed((ms - atMs) / 1000);

function matters(incident: Incident, atMs: number): boolean {
	const slow = incident.toMs > incident.atMs && ['loss', 'offset'].includes(incident.kind);
	if (slow) return incident.atMs <= atMs && incident.toMs >= atMs;
	return Math.abs(incident.atMs - atMs) < NEAR_MS || Math.abs(incident.toMs - atMs) < END_NEAR_MS;
}

/** What of the truth stands near an instant of a bay, in words: the reason for a miss. */
export function explain(generated: Generated, bayIndex: number, atMs: number): string {
	const { truth, plan } = generated;
	const nodeIndex = plan.nodes.findIndex((node) => node.bayIndex === bayIndex);
	const vehicles = truth.stays
		.filter((stay) => stay.bayIndex === bayIndex)
		.filter(({ fromMs, toMs }) => fromMs < atMs + NEAR_MS && toMs > atMs - NEAR_MS)
		.map(
			({ sizeMg, fromMs, toMs }) =>
				`own vehicle ${sizeMg.toFixed(0)} mG ${sinceS(fromMs, atMs)} to ${sinceS(toMs, atMs)} s`
		);
	const incidents = truth.incidents
		.filter((incident) => incident.nodeIndex === nodeIndex && matters(incident, atMs))
		.map(({ kind, mg, atMs: fromMs }) => `${kind} ${mg.toFixed(0)} mG ${sinceS(fromMs, atMs)} s`);
	const near = [...vehicles, ...incidents];
	return near.length === 0 ? 'nothing near' : near.slice(0, MOST).join(' · ');
}
