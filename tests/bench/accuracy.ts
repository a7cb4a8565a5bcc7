import { parseArgs } from 'node:util';
import { ALL_SCENARIOS, scenarioByName } from '../../simulator/scenarios/lines';
import { generate } from '../../simulator/generate';
import { detect } from '../accuracy/support/detect';
import { grade, type Score } from '../accuracy/support/grade';

/**
 * npm run bench:accuracy -- [--scenarios hard,echo] [--seed 1 | --fresh] [--rounds 1] [--misses 5] [--events 20000]
 *
 * Prints one table line and one JSON line a scenario; --misses shows what was missed and why.
 */
const { values } = parseArgs({
	options: {
		scenarios: { type: 'string' },
		seed: { type: 'string', default: '1' },
		fresh: { type: 'boolean', default: false },
		misses: { type: 'string', default: '0' }
	}
});

/** What the columns of node_fast and node_slow take (store/schema/node.ts). */
const FAST_BYTES = 300;
const SLOW_BYTES = 4096;

const seed = values.fresh ? Date.now() % 1_000_000 : Number(values.seed);
const names = values.scenarios?.split(',') ?? ALL_SCENARIOS.map(({ name }) => name);

function line(name: string, score: Score): string {
	const percent = (share: number) => `${(100 * share).toFixed(2)} %`;
	return [
		name.padEnd(11),
		`F1 ${score.f1.toFixed(4)}`,
		`precision ${score.precision.toFixed(4)}`,
		`recall ${score.recall.toFixed(4)}`,
		`events ${score.truths}`,
		`missed ${score.truths - score.hits}`,
		`false ${score.falses}`,
		`right ${percent(score.right)}`,
		`unknown ${percent(score.unknown)}`,
		JSON.stringify(score.apart)
	].join('  ');
}

for (const name of names) {
	const scenario = scenarioByName(name);
	if (scenario === undefined) throw new Error(`no scenario is called ${name}`);
	const generated = generate(scenario, seed);
	const detected = detect(generated);
	const score = grade(generated, detected);
	console.log(line(name, score));
	if (detected.fastBytes > FAST_BYTES || detected.slowBytes > SLOW_BYTES) {
		console.log(
			`   STORED STATE TOO LONG: fast ${detected.fastBytes} of ${FAST_BYTES} B, slow ${detected.slowBytes} of ${SLOW_BYTES} B: ingest stands still`
		);
	}
	for (const miss of score.misses.slice(0, Number(values.misses))) {
		const { code } = generated.plan.bays[miss.bayIndex]!;
		const at = new Date(miss.atMs).toISOString();
		console.log(`   ${miss.kind} ${miss.type} ${code} (node ${miss.bayIndex}) ${at} ${miss.why}`);
	}
}
