import type { ParamName } from '$lib/detection/params';
import type { DriftParamName } from '$lib/drift/params';

/** What a setting is called on screen; its table says unit, range and reason. */
export interface ParameterGroup {
	title: string;
	labels: Partial<Record<ParamName | DriftParamName, string>>;
}

/** Every setting once, in the order in which people read how a state comes about. */
export const PARAMETER_GROUPS: readonly ParameterGroup[] = [
	{
		title: 'When a bay counts as taken',
		labels: {
			onMg: 'On threshold',
			onSigma: 'On threshold, in noise',
			onPassFactor: 'On threshold, over passes',
			offRatio: 'Off threshold, of on',
			releaseRatio: 'Release, of the stay',
			stepRatio: 'Step, of on',
			undoRatio: 'A departure undoes its arrival within',
			baselineTauS: 'Baseline follows within'
		}
	},
	{
		title: 'Stillness and gaps',
		labels: {
			stillS: 'A level stands for',
			stillMg: 'Still within',
			stillSigma: 'Still within, in noise',
			gapMinS: 'A gap from',
			gapPeriods: 'A gap from, in periods'
		}
	},
	{
		title: 'Neighbours and echoes',
		labels: {
			neighbourM: 'Neighbours within',
			echoRatio: 'Echo under',
			echoSlowRatio: 'Echo under, between beats',
			echoSureRatio: 'Echo whatever its timing, under',
			echoEarlyS: 'An echo stills before its vehicle by',
			echoLateS: 'An echo stills after it by',
			echoUndoRatio: 'An echo goes with its vehicle within',
			exactRatio: 'No echo when it undoes the arrival within',
			exactSlowRatio: 'The same, between beats',
			pendS: 'A step waits for a neighbour',
			onsetS: 'A movement began at most before',
			slackS: 'Times of neighbours may miss by'
		}
	},
	{
		title: 'Queue in the aisle',
		labels: {
			queueS: 'A queue stops within',
			queueFactor: 'Steps of a queue alike within',
			queueOnRatio: 'May stand in the aisle under',
			queueFlatOnRatio: 'The same without an axle’s peak',
			flatRatio: 'No axle under this peak',
			queueMaxS: 'Parked after'
		}
	},
	{
		title: 'Film, pulses and overload',
		labels: {
			invertedAxisMg: 'Axis that shows a flipped film',
			invertedRatio: 'Mirrored field near within',
			rescaleAxisMg: 'Axis that shows its gain',
			pulseQuietS: 'No step after a pulse for',
			clippedUnknownS: 'Not known after an overload of'
		}
	},
	{
		title: 'Temperature under a vehicle',
		labels: {
			slopeSeMgPerC: 'Slope used when surer than',
			slopePriorMgPerC: 'Spread of slopes before one is known'
		}
	},
	{
		title: 'Learning the quiet field',
		labels: {
			learnReadings: 'Readings at least',
			learnS: 'Over at least',
			learnSigmaMg: 'Noise at most',
			returnMg: 'Back at the reference within',
			returnsToProve: 'Returns that prove a provisional one',
			swapVisits: 'Visits that replace a provisional one'
		}
	},
	{
		title: 'Long stays and settling',
		labels: {
			longStayH: 'Long from',
			longStayFactor: 'Long against the bay’s usual',
			longStayMaxH: 'Checked at the latest after',
			longSizeRatio: 'Same vehicle: size within',
			longAngleDeg: 'Same vehicle: direction within',
			settleUndoH: 'A settling can be undone for'
		}
	},
	{
		title: 'Drift: when it is told',
		labels: {
			driftingMg: 'Drifting from',
			driftingHours: 'Drifting for',
			refreshMg: 'Film refresh due from',
			refreshHours: 'Film refresh due for',
			visitOffsetMg: 'Offset jump that means a visit',
			visitOffsetDays: 'Two such jumps within',
			visitGain: 'Gain off that means a visit'
		}
	},
	{
		title: 'Drift: temperature slope',
		labels: {
			tripleDenominatorC: 'Temperature must bend by',
			minTriples: 'Triples of hours at least',
			slopeDays: 'Days looked back',
			offsetSlopeSpanC: 'Pairs must span'
		}
	},
	{
		title: 'Drift: geomagnetic line of the site',
		labels: {
			lineNodes: 'Nodes at least',
			lineSpreadMg: 'Nodes agree within',
			lineSpreadShare: 'Agree within, of the change',
			lineLimitMg: 'Largest change believed'
		}
	},
	{
		title: 'Drift: causes and pairs',
		labels: {
			tiltMagnitudeMg: 'Tilt: magnitude kept within',
			gainAngleDeg: 'Gain: direction kept within',
			gainShareAcross: 'Gain: share across at most',
			calibrateDays: 'A pair by rule every',
			diagnoseHours: 'A pair on drift at most every'
		}
	},
	{
		title: 'Drift: charts and rates',
		labels: {
			cusumK: 'CUSUM allowance',
			cusumKMg: 'CUSUM allowance at least',
			cusumH: 'CUSUM limit',
			cusumHMg: 'CUSUM limit at least',
			centreDays: 'Days that say where zero is',
			rateDays: 'Days a rate is taken over',
			ewmaLambda: 'EWMA weight of the newest day',
			ewmaSigmas: 'EWMA limits'
		}
	}
];

/** Name on screen of a setting; the code name where there is none. */
export const parameterLabel = (name: string): string => LABELS[name] ?? name;

const LABELS: Readonly<Record<string, string>> = Object.assign(
	{},
	...PARAMETER_GROUPS.map(({ labels }) => labels)
) as Record<string, string>;

/** '35 mG', '0.7' for ratios, without trailing noise of binary fractions. */
export function parameterValue(value: number, unit: string): string {
	const text = String(Number(value.toPrecision(6))).replace('-', '\u2212');
	return unit === '1' ? text : unit === '°' ? `${text}°` : `${text} ${unit}`;
}
