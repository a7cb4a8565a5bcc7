import type { ParamName } from '$lib/detection/params';
import type { DriftParamName } from '$lib/drift/params';
import { decimal } from '$lib/format/field';
import { named } from '$lib/format/messages';
import { parametersWords } from '$lib/format/messages/parameters';

/** Settings that stand together on screen; their table says unit, range and reason. */
export interface ParameterGroup {
	title: string;
	names: readonly string[];
}
type Name = ParamName | DriftParamName;
type Group = keyof ReturnType<typeof parametersWords>['group'];

/** Every setting once, in the order in which people read how a state comes about. */
const GROUPS: Readonly<Record<Group, readonly Name[]>> = {
	taken: [
		'onMg',
		'onSigma',
		'onPassFactor',
		'offRatio',
		'releaseRatio',
		'stepRatio',
		'undoRatio',
		'baselineTauS'
	],
	still: ['stillS', 'stillMg', 'stillSigma', 'gapMinS', 'gapPeriods'],
	neighbours: [
		'neighbourM',
		'echoRatio',
		'echoSlowRatio',
		'echoSureRatio',
		'echoEarlyS',
		'echoLateS',
		'echoUndoRatio',
		'exactRatio',
		'exactSlowRatio',
		'pendS',
		'onsetS',
		'slackS'
	],
	queue: ['queueS', 'queueFactor', 'queueOnRatio', 'queueFlatOnRatio', 'flatRatio', 'queueMaxS'],
	film: ['invertedAxisMg', 'invertedRatio', 'rescaleAxisMg', 'pulseQuietS', 'clippedUnknownS'],
	temperature: ['slopeSeMgPerC', 'slopePriorMgPerC'],
	learning: ['learnReadings', 'learnS', 'learnSigmaMg', 'returnMg', 'returnsToProve', 'swapVisits'],
	stays: [
		'longStayH',
		'longStayFactor',
		'longStayMaxH',
		'longSizeRatio',
		'longAngleDeg',
		'settleUndoH'
	],
	driftTold: [
		'driftingMg',
		'driftingHours',
		'refreshMg',
		'refreshHours',
		'visitOffsetMg',
		'visitOffsetDays',
		'visitGain'
	],
	driftSlope: ['tripleDenominatorC', 'minTriples', 'slopeDays', 'offsetSlopeSpanC'],
	driftLine: ['lineNodes', 'lineSpreadMg', 'lineSpreadShare', 'lineLimitMg'],
	driftCauses: [
		'tiltMagnitudeMg',
		'gainAngleDeg',
		'gainShareAcross',
		'calibrateDays',
		'diagnoseHours'
	],
	driftCharts: [
		'cusumK',
		'cusumKMg',
		'cusumH',
		'cusumHMg',
		'centreDays',
		'rateDays',
		'ewmaLambda',
		'ewmaSigmas'
	]
};
export const parameterGroups = (): ParameterGroup[] =>
	Object.entries(GROUPS).map(([key, names]) => ({
		title: parametersWords().group[key as Group],
		names
	}));

/** Name on screen of a setting; the code name where there is none. */
export const parameterLabel = (name: string): string =>
	named(parametersWords().label, name) ?? name;

/** '35 mG', '0.7' for ratios, without trailing noise of binary fractions. */
export function parameterValue(value: number, unit: string): string {
	const whole = String(Number(value.toPrecision(6)));
	const text = decimal(Number(whole), whole.split('.')[1]?.length ?? 0);
	if (unit === '1') return text;
	return unit === '°' ? `${text}°` : `${text} ${unitWord(value, unit)}`;
}

/** Units that are words are said in the language; signs stay. */
function unitWord(value: number, unit: string): string {
	const { unit: nouns } = parametersWords();
	if (!Object.hasOwn(nouns, unit)) return unit;
	const [one, many] = nouns[unit as keyof typeof nouns];
	return (value === 1 ? one : many) ?? unit;
}
