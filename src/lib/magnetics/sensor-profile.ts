/** What a kind of node is, in figures (method 1). Charges in microcoulomb, fields in mG. */
export interface SensorProfile {
	/** Lower-case letters, digits and hyphens, at most 32. */
	code: string;
	name: string;
	/** Resolution of the converter. */
	bits: number;
	/** Offset-binary count of the null field. */
	nullCount: number;
	/** Scale. Two readings of one data sheet differ by 2.4 %, so it is data and never a constant. */
	countsPerGauss: number;
	rangeMg: number;
	/** Relative change of sensitivity per °C (κ), negative as a rule. */
	sensitivityTempcoPerC: number;
	/** A field below this leaves the film's magnetization alone. */
	filmSafeMg: number;
	pulseChargeUc: number;
	sleepCurrentUa: number;
	/** Fixed charge of a frame sent, whatever its time on air. */
	frameChargeUc: number;
	/** Charge of a second with the radio on. */
	radioChargeUcPerS: number;
	cellCapacityMah: number;
	/** Share of its charge that the cell loses by itself in a year. */
	selfDischargePerYear: number;
	/** Share of the capacity that can be had, by temperature, rising. */
	capacityByTemp: readonly { tempC: number; share: number }[];
	/** Below this no pulse is fired (method 7). */
	batteryFloorMv: number;
}

interface Range {
	min: number;
	max: number;
	integer?: true;
}

/** Range of each figure, as a person may enter it. */
export const PROFILE_RANGES = {
	bits: { min: 8, max: 24, integer: true },
	nullCount: { min: 0, max: 2 ** 24 - 1, integer: true },
	countsPerGauss: { min: 10, max: 1_000_000 },
	rangeMg: { min: 1000, max: 100_000 },
	sensitivityTempcoPerC: { min: -0.02, max: 0.02 },
	filmSafeMg: { min: 500, max: 100_000 },
	pulseChargeUc: { min: 0, max: 1_000_000 },
	sleepCurrentUa: { min: 0, max: 10_000 },
	frameChargeUc: { min: 0, max: 10_000_000 },
	radioChargeUcPerS: { min: 0, max: 10_000_000 },
	cellCapacityMah: { min: 10, max: 1_000_000 },
	selfDischargePerYear: { min: 0, max: 0.5 },
	batteryFloorMv: { min: 1000, max: 20_000 }
} as const satisfies Partial<Record<keyof SensorProfile, Range>>;
type FigureName = keyof typeof PROFILE_RANGES;
const FIGURES = Object.entries(PROFILE_RANGES) as [FigureName, Range][];

const CODE = /^[a-z0-9-]{1,32}$/;

/**
 * Figures shared by the built-in profiles, to be replaced by those of the node at hand. κ: typical of AMR
 * bridges at constant voltage (check-values 5d, part A, -0.30 %/°C). Film: fields above about 4 to 20 G upset
 * it (check-values 5b), so 4 G is the careful end. Charges and cell: our own assumptions of a small node.
 */
const COMMON = {
	rangeMg: 8000,
	sensitivityTempcoPerC: -0.003,
	filmSafeMg: 4000,
	pulseChargeUc: 120,
	sleepCurrentUa: 12,
	frameChargeUc: 1500,
	radioChargeUcPerS: 32_000,
	cellCapacityMah: 8500,
	selfDischargePerYear: 0.01,
	capacityByTemp: [
		{ tempC: -40, share: 0.45 },
		{ tempC: -20, share: 0.7 },
		{ tempC: 0, share: 0.88 },
		{ tempC: 20, share: 1 },
		{ tempC: 60, share: 0.92 }
	],
	batteryFloorMv: 3000
};

function builtIn(bits: 16 | 18, countsPerGauss: number): SensorProfile {
	return {
		code: `amr-${bits}-${countsPerGauss}`,
		name: `AMR bridge, ${bits} bit, ±8 G, ${countsPerGauss} counts/G`,
		bits,
		nullCount: 2 ** (bits - 1),
		countsPerGauss,
		...COMMON
	};
}

/** Method 1: both readings of the scale, in both resolutions. */
export const BUILT_IN_PROFILES: readonly SensorProfile[] = [
	builtIn(18, 16_384),
	builtIn(18, 16_000),
	builtIn(16, 4096),
	builtIn(16, 4000)
];

export const builtInProfile = (code: string): SensorProfile | null =>
	BUILT_IN_PROFILES.find((profile) => profile.code === code) ?? null;

export interface ProfileProblem {
	field: keyof SensorProfile;
	problem: string;
}
export type ParsedProfile =
	{ ok: true; profile: SensorProfile } | { ok: false; problems: ProfileProblem[] };

function figureProblem(value: unknown, { min, max, integer }: Range): string | null {
	if (typeof value !== 'number' || !Number.isFinite(value)) return 'is no number';
	if (integer === true && !Number.isInteger(value)) return 'is no whole number';
	return value < min || value > max ? `is not within ${min} to ${max}` : null;
}

function capacityProblem(value: unknown): string | null {
	if (!Array.isArray(value) || value.length < 1 || value.length > 20)
		return 'is no list of 1 to 20 points';
	let lastC = -Infinity;
	for (const point of value as { tempC?: unknown; share?: unknown }[]) {
		const tempC = point?.tempC;
		if (figureProblem(tempC, { min: -80, max: 120 }) !== null) return 'has a point without tempC';
		if (figureProblem(point.share, { min: 0, max: 1.2 }) !== null)
			return 'has a point without a share of 0 to 1.2';
		if ((tempC as number) <= lastC) return 'does not rise in temperature';
		lastC = tempC as number;
	}
	return null;
}

/** Count of the null field and range must fit the converter, or every reading would be nonsense. */
function spanProblems(profile: SensorProfile): ProfileProblem[] {
	const problems: ProfileProblem[] = [];
	if (profile.nullCount >= 2 ** profile.bits)
		problems.push({ field: 'nullCount', problem: `is over ${profile.bits} bits` });
	const spanMg = (2 ** profile.bits * 1000) / profile.countsPerGauss;
	if (spanMg < profile.rangeMg)
		problems.push({ field: 'rangeMg', problem: 'is wider than bits and counts per gauss give' });
	return problems;
}

function fieldProblems(input: Record<string, unknown>): ProfileProblem[] {
	const problems: ProfileProblem[] = [];
	const note = (field: keyof SensorProfile, problem: string | null) => {
		if (problem !== null) problems.push({ field, problem });
	};
	const { code, name } = input;
	note(
		'code',
		typeof code === 'string' && CODE.test(code) ? null : 'is not 1 to 32 of a-z, 0-9, hyphen'
	);
	note(
		'name',
		typeof name === 'string' && name.trim() !== '' && name.length <= 120
			? null
			: 'is not 1 to 120 characters'
	);
	for (const [field, range] of FIGURES) note(field, figureProblem(input[field], range));
	note('capacityByTemp', capacityProblem(input['capacityByTemp']));
	return problems;
}

function onlyKnown(profile: SensorProfile): SensorProfile {
	const figures = Object.fromEntries(FIGURES.map(([field]) => [field, profile[field]]));
	const capacityByTemp = profile.capacityByTemp.map(({ tempC, share }) => ({ tempC, share }));
	const { code, name } = profile;
	return { code, name, ...(figures as Pick<SensorProfile, FigureName>), capacityByTemp };
}

/** Checks a profile from outside (a form, a file, the store); every problem is named, none thrown. */
export function parseProfile(value: unknown): ParsedProfile {
	if (typeof value !== 'object' || value === null)
		return { ok: false, problems: [{ field: 'code', problem: 'is no profile' }] };
	const problems = fieldProblems(value as Record<string, unknown>);
	if (problems.length > 0) return { ok: false, problems };
	const profile = onlyKnown(value as SensorProfile);
	const odd = spanProblems(profile);
	return odd.length > 0 ? { ok: false, problems: odd } : { ok: true, profile };
}

/** Share of the cell's capacity to be had at a temperature: straight between the points, level beyond. */
export function capacityShare(
	{ capacityByTemp }: Pick<SensorProfile, 'capacityByTemp'>,
	tempC: number
): number {
	let below = capacityByTemp[0];
	for (const point of capacityByTemp) {
		if (point.tempC >= tempC) {
			if (below === undefined || below.tempC >= tempC) return point.share;
			const along = (tempC - below.tempC) / (point.tempC - below.tempC);
			return below.share + along * (point.share - below.share);
		}
		below = point;
	}
	return below?.share ?? 1;
}
