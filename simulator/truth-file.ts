import { appendFileSync, mkdirSync } from 'node:fs';
import { join } from 'node:path';
import type { SitePlan } from './site-plan';
import type { Stay } from './truth';

const FILE = 'truth.jsonl';

/** Appends what really happens to a file of JSON lines: one a stay, times in RFC 3339, sizes in mG. */
export function tellStays(dir: string, plan: SitePlan, stays: readonly Stay[]): void {
	const lines = [...stays]
		.sort((a, b) => a.fromMs - b.fromMs)
		.map((stay) =>
			JSON.stringify({
				what: 'stay',
				bay: plan.bays[stay.bayIndex]!.code,
				from: new Date(stay.fromMs).toISOString(),
				to: new Date(stay.toMs).toISOString(),
				sizeMg: Math.round(stay.sizeMg)
			})
		);
	append(dir, lines);
}

/** Something else that happened to a node: a pulse obeyed, a flip. */
export function tellIncident(dir: string, serial: string, what: string, atMs: number): void {
	append(dir, [JSON.stringify({ what, serial, at: new Date(atMs).toISOString() })]);
}

function append(dir: string, lines: readonly string[]): void {
	if (lines.length === 0) return;
	mkdirSync(dir, { recursive: true, mode: 0o700 });
	appendFileSync(join(dir, FILE), `${lines.join('\n')}\n`, { mode: 0o600 });
}
