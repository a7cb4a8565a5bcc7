/** One detector setting: what people may change, within which limits, and why it stands where it does. */
export interface ParamSpec {
	readonly defaultValue: number;
	readonly min: number;
	readonly max: number;
	readonly unit: string;
	readonly reason: string;
}

const spec = (
	defaultValue: number,
	min: number,
	max: number,
	unit: string,
	reason: string
): ParamSpec => ({ defaultValue, min, max, unit, reason });

/** Every threshold of the detector (method 3 and 4). Names carry their unit; ratios have none. */
export const PARAMS = {
	onMg: spec(35, 10, 200, 'mG', 'least disturbance of a parked vehicle that is told from noise'),
	onSigma: spec(12, 4, 40, 'sigma', 'a noisy sensor needs a higher threshold'),
	onPassFactor: spec(
		0,
		0,
		3,
		'1',
		'threshold over the 98th percentile of passes; 0 leaves them out'
	),
	offRatio: spec(0.7, 0.3, 0.95, '1', 'off threshold as a share of on: hysteresis'),
	releaseRatio: spec(
		0.35,
		0.1,
		0.8,
		'1',
		'a big vehicle leaves more residue than a small one is tall'
	),
	stepRatio: spec(0.5, 0.2, 1, '1', 'share of on that must come at once: vehicles come in seconds'),
	stillS: spec(3, 1, 30, 's', 'how long a level must stand before it is judged'),
	stillMg: spec(4, 1, 20, 'mG', 'readings of a still field lie within this box'),
	stillSigma: spec(5, 3, 12, 'sigma', 'the same for noisy sensors'),
	gapMinS: spec(90, 30, 600, 's', 'a longer silence hides how the field moved'),
	gapPeriods: spec(2.5, 1.5, 10, 'periods', 'the same in reporting periods'),
	baselineTauS: spec(1800, 120, 14400, 's', 'the baseline follows weather, not vehicles'),
	undoRatio: spec(0.4, 0.1, 0.8, '1', 'a departure undoes its arrival within this share of it'),
	slopeSeMgPerC: spec(1, 0, 2, 'mG/°C', 'a slope less sure than this is not used'),
	slopePriorMgPerC: spec(1, 0, 3, 'mG/°C', 'spread of temperature slopes while a node has none'),
	neighbourM: spec(4, 0, 20, 'm', 'vehicles are felt as far as the next bay'),
	echoRatio: spec(0.55, 0.1, 0.9, '1', 'a step under this share of the neighbour’s is its echo'),
	echoSlowRatio: spec(
		0.28,
		0.1,
		0.9,
		'1',
		'the same where only a beat’s bracket tells the time: nearly all echoes are smaller'
	),
	echoSureRatio: spec(0.14, 0, 0.5, '1', 'under this share it is an echo whatever its timing'),
	echoEarlyS: spec(
		4,
		0,
		30,
		's',
		'an echo falls still before its vehicle: its last movement is too small'
	),
	echoLateS: spec(1.5, 0, 30, 's', 'but hardly after it'),
	echoUndoRatio: spec(0.5, 0.1, 0.9, '1', 'an echo goes with its vehicle within this share'),
	exactRatio: spec(0.25, 0, 0.5, '1', 'a step this near to undoing the arrival is no echo'),
	exactSlowRatio: spec(
		0.5,
		0,
		0.8,
		'1',
		'the same between beats, where an echo may lie on top of it'
	),
	pendS: spec(60, 2, 120, 's', 'how long a step waits for a neighbour that still moves'),
	onsetS: spec(6, 1, 30, 's', 'within a burst the movement began at most this long before'),
	slackS: spec(2, 0, 30, 's', 'time brackets of neighbours may miss each other by this much'),
	queueS: spec(20, 5, 120, 's', 'vehicles of a queue stop within this time of each other'),
	queueFactor: spec(2.5, 1, 10, '1', 'steps of one queue are alike within this factor'),
	queueOnRatio: spec(2, 1, 5, '1', 'a level under this many thresholds may stand in the aisle'),
	queueFlatOnRatio: spec(3, 1, 6, '1', 'the same for what rose without an axle’s peak'),
	flatRatio: spec(1.3, 1.05, 3, '1', 'a peak under this many times the level shows no axle'),
	queueMaxS: spec(600, 60, 7200, 's', 'what stands longer is parked'),
	invertedAxisMg: spec(50, 20, 200, 'mG', 'an axis must carry this much to show its sign'),
	invertedRatio: spec(
		0.1,
		0.02,
		0.5,
		'1',
		'how near the mirrored field must come to the known one'
	),
	rescaleAxisMg: spec(50, 10, 200, 'mG', 'an axis must carry this much to show its gain'),
	pulseQuietS: spec(2, 0.5, 30, 's', 'no step is judged this long after a pulse'),
	clippedUnknownS: spec(10, 0, 600, 's', 'a clipped sensor that lasts says nothing of its bay'),
	learnReadings: spec(30, 10, 60, 'readings', 'a median of fewer is not steady'),
	learnS: spec(120, 30, 3600, 's', 'shorter stillness is also a pause in traffic'),
	learnSigmaMg: spec(3, 0.5, 10, 'mG', 'a field noisier than this is not quiet'),
	returnMg: spec(10, 3, 50, 'mG', 'a field this near to the reference has come back to it'),
	swapVisits: spec(
		5,
		0,
		5,
		'visits',
		'a provisional reference gives way to a field that stays return to so often; 0 = never'
	),
	returnsToProve: spec(3, 1, 20, 'returns', 'a provisional reference is proved by as many returns'),
	longStayH: spec(48, 6, 336, 'h', 'a stay longer than usual is held against its arrival'),
	longStayFactor: spec(1.5, 1, 5, '1', 'the same against this bay’s 99th percentile'),
	longStayMaxH: spec(336, 48, 1440, 'h', 'no stay goes unchecked for longer'),
	longSizeRatio: spec(0.2, 0.05, 0.6, '1', 'a standing vehicle keeps its size'),
	longAngleDeg: spec(15, 5, 60, '°', 'and its direction'),
	settleUndoH: spec(24, 1, 168, 'h', 'how long a settlement can be taken back')
} as const satisfies Record<string, ParamSpec>;

export type ParamName = keyof typeof PARAMS;
export type Params = Readonly<Record<ParamName, number>>;

export const PARAM_NAMES = Object.keys(PARAMS) as ParamName[];

const isName = (name: string): name is ParamName => Object.hasOwn(PARAMS, name);

export type ParamRefusal = { name: string; why: 'not_a_setting' | 'out_of_range' };

/** What is wrong with overrides, for the edge that takes them from people. */
export function refuseParams(overrides: Readonly<Record<string, number>>): ParamRefusal[] {
	return Object.entries(overrides).flatMap(([name, value]): ParamRefusal[] => {
		if (!isName(name)) return [{ name, why: 'not_a_setting' }];
		const { min, max } = PARAMS[name];
		return value >= min && value <= max ? [] : [{ name, why: 'out_of_range' }];
	});
}

/** Defaults under overrides; names that are no settings are left out, values are held in range. */
export function resolveParams(overrides: Readonly<Record<string, number>>): Params {
	const resolved = {} as Record<ParamName, number>;
	for (const name of PARAM_NAMES) {
		const { defaultValue, min, max } = PARAMS[name];
		const value = overrides[name];
		resolved[name] =
			value === undefined || Number.isNaN(value)
				? defaultValue
				: Math.min(max, Math.max(min, value));
	}
	return resolved;
}
