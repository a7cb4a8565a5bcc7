/** One drift setting: what people may change, within which limits, and why it stands where it does. */
export interface DriftParam {
	readonly defaultValue: number;
	readonly min: number;
	readonly max: number;
	readonly unit: string;
	readonly reason: string;
}

const param = (
	defaultValue: number,
	min: number,
	max: number,
	unit: string,
	reason: string
): DriftParam => ({ defaultValue, min, max, unit, reason });

/** Every threshold of drift (method 5, 6). Names carry their unit. */
export const DRIFT_PARAMS = {
	driftingMg: param(10, 4, 50, 'mG', 'a third of the usual on threshold: states are still good'),
	driftingHours: param(2, 1, 24, 'h', 'one odd hour is no drift'),
	refreshMg: param(16, 6, 60, 'mG', 'half of the usual on threshold: act before states go wrong'),
	refreshHours: param(6, 1, 72, 'h', 'works or a storm may pass within hours'),
	calibrateDays: param(
		7,
		1,
		60,
		'd',
		'offsets and steel are told apart weekly at the price of a pulse'
	),
	diagnoseHours: param(6, 1, 72, 'h', 'a pair that told nothing tells no more within hours'),
	tripleDenominatorC: param(
		2,
		1,
		6,
		'°C',
		'temperature that bends less over a day tells slope from noise badly'
	),
	minTriples: param(40, 10, 1000, '1', 'fewer triples give no slope worth the name'),
	slopeDays: param(60, 7, 60, 'd', 'long enough to average weather, short enough to follow age'),
	offsetSlopeSpanC: param(10, 4, 40, '°C', 'pairs that span less do not tell an offset slope'),
	lineNodes: param(5, 3, 50, '1', 'fewer nodes cannot outvote one that moved'),
	lineSpreadMg: param(2, 0.5, 10, 'mG', 'nodes that disagree more see no common cause'),
	lineSpreadShare: param(
		0.5,
		0,
		2,
		'1',
		'local steel turns frames by some degrees: a large storm scatters more'
	),
	lineLimitMg: param(25, 5, 100, 'mG', 'no geomagnetic storm is wider here'),
	cusumK: param(0.5, 0.1, 2, 'sigma', 'best against a shift of one sigma'),
	cusumKMg: param(2, 0.5, 10, 'mG', 'slower movement than this is left to the rate'),
	cusumH: param(6, 3, 12, 'sigma', 'two-sided run length of years on daily medians'),
	cusumHMg: param(10, 3, 50, 'mG', 'no alarm below the drifting limit in sum'),
	centreDays: param(14, 7, 60, 'd', 'daily medians that say where zero is and how they scatter'),
	rateDays: param(14, 7, 60, 'd', 'two weeks: weather has passed, the trend has not'),
	ewmaLambda: param(0.2, 0.05, 1, '1', 'smooth enough to read, quick enough to see a week'),
	ewmaSigmas: param(3, 2, 5, 'sigma', 'usual limits of a control chart'),
	tiltMagnitudeMg: param(2, 0.5, 10, 'mG', 'a turned sensor sees the same magnitude'),
	gainAngleDeg: param(2, 0.5, 10, '°', 'a weaker sensor sees the same direction'),
	gainShareAcross: param(
		0.3,
		0.1,
		0.6,
		'1',
		'small shifts turn nothing by 2°: they must also point along the field'
	),
	visitOffsetMg: param(20, 8, 100, 'mG', 'an offset that jumps so is a failing bridge'),
	visitOffsetDays: param(30, 7, 120, 'd', 'twice within this is no accident'),
	visitGain: param(0.07, 0.02, 0.3, '1', 'gain that no pulse brings back')
} as const satisfies Record<string, DriftParam>;

export type DriftParamName = keyof typeof DRIFT_PARAMS;
export type DriftSettings = Readonly<Record<DriftParamName, number>>;

/** Defaults with overrides of a site or node by name; values out of range are held at their ends. */
export function driftSettings(overrides: Readonly<Record<string, number>> = {}): DriftSettings {
	const entries = Object.entries(DRIFT_PARAMS).map(([name, { defaultValue, min, max }]) => {
		const value = overrides[name] ?? defaultValue;
		return [name, Math.min(max, Math.max(min, value))];
	});
	return Object.fromEntries(entries) as DriftSettings;
}
