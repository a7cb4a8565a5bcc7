import { parseArgs } from 'node:util';
import { refuseParams } from '$lib/detection/params';
import { ALL_SCENARIOS, scenarioByName } from '../../simulator/scenarios/lines';
import { addScores } from '../accuracy/support/grade';
import {
	cappedLine,
	detailLines,
	jsonLine,
	missLines,
	publishedLines,
	reliabilityLines,
	scoreLine
} from '../accuracy/support/report';
import { runRound, type Round } from '../accuracy/support/round';

/**
 * npm run bench:accuracy -- [--scenarios hard,echo] [--seed 1 | --fresh] [--rounds 1] [--misses 5] [--alone]
 *                           [--set onPassFactor=1.2,stillSigma=4] [--site-line]
 *
 * Every line of method.md 11 and their mixture: events matched as section 9 says, Wilson limits, share
 * of time in the right state, confidence as section 4 judges it, and beside them the published methods of
 * section 12 on the same rows (left out with --alone). One round of everything holds over 50,000 events.
 */
const { values } = parseArgs({
	options: {
		scenarios: { type: 'string' },
		seed: { type: 'string', default: '1' },
		fresh: { type: 'boolean', default: false },
		rounds: { type: 'string', default: '1' },
		misses: { type: 'string', default: '0' },
		alone: { type: 'boolean', default: false },
		set: { type: 'string', default: '' },
		'site-line': { type: 'boolean', default: false }
	}
});

const seed = values.fresh ? Date.now() % 1_000_000 : Number(values.seed);
const names = values.scenarios?.split(',') ?? ALL_SCENARIOS.map(({ name }) => name);
/** Detector settings other than the defaults, so that their price is known. */
const params = Object.fromEntries(
	values.set
		.split(',')
		.filter((pair) => pair !== '')
		.map((pair) => pair.split('='))
		.map(([name, value]) => [name ?? '', Number(value)])
);
const refused = refuseParams(params);
if (refused.length > 0) throw new Error(`settings refused: ${JSON.stringify(refused)}`);
const print = (lines: readonly string[]): void => console.log(lines.join('\n'));

function bench(name: string): Round[] {
	const scenario = scenarioByName(name);
	if (scenario === undefined) throw new Error(`no scenario is called ${name}`);
	const seeds = Array.from({ length: Number(values.rounds) }, (_, i) => seed + i);
	const rounds = seeds.map((one) =>
		runRound(scenario, one, {
			params,
			withSiteLine: values['site-line'],
			...(values.alone ? {} : { published: 'with' })
		})
	);
	const score = addScores(rounds.map((round) => round.score));
	print([scoreLine(name, score), ...rounds.flatMap(detailLines)]);
	if (Number(values.misses) > 0) {
		print(rounds.flatMap((round) => missLines(round, Number(values.misses))));
	}
	if (!values.alone) print(publishedLines(rounds));
	print([jsonLine(name, seeds, score)]);
	return rounds;
}

console.log(`seeds from ${seed}${values.fresh ? ' (fresh)' : ''}`);
const all = names.flatMap(bench);
const total = addScores(all.map((round) => round.score));
print([
	'',
	scoreLine('all of these', total),
	...(values.alone ? [] : publishedLines(all)),
	...reliabilityLines(
		'confidence at random instants',
		all.flatMap((round) => round.judged.random),
		seed
	),
	...reliabilityLines(
		'confidence within 30 min of events',
		all.flatMap((round) => round.judged.nearEvents),
		seed
	),
	...cappedLine(all.flatMap((round) => round.judged.capped)),
	jsonLine('all', [seed], total)
]);
