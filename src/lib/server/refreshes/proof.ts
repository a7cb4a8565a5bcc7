import { differenceSigma } from '$lib/numeric/mad';
import { median } from '$lib/numeric/quantile';
import { fieldAtReference, fieldOf, pairField, pairOffset } from '$lib/magnetics/set-reset';
import { magnitude, subtract, type Vec3 } from '$lib/magnetics/vector';
import type { RefreshParams } from './params';

/** A row of readings, raw mG. */
export interface ProofRow {
	atMs: number;
	rawMg: Vec3;
	polarity: 1 | -1;
	tempC: number | null;
}

/** What is held against each other (method 7). Fields in mG, node axes; null = did not come. */
export interface ProofInput {
	pulseAtMs: number;
	setMg: Vec3;
	resetMg: Vec3;
	before: { polarity: 1 | -1; rawMg: Vec3 } | null;
	afterMg: Vec3 | null;
	pulseTempC: number | null;
	/** Detection took the offset of this pair into use; why not otherwise. Null = not judged yet. */
	offsetTaken: boolean | null;
	offsetRefusal: string | null;
	/** Still readings of the empty bay, before and after; oldest first. */
	rowsBefore: readonly ProofRow[];
	rowsAfter: readonly ProofRow[];
	offsetBeforeMg: Vec3 | null;
	/** `offsetMg` null: learned before the first pair, so its field still holds the offset. */
	reference: {
		fieldMg: Vec3;
		offsetMg: Vec3 | null;
		tempC: number | null;
		sigmaMg: number;
	} | null;
	sensitivityTempcoPerC: number;
	/** Unexplained drift by drift's own books, before and (once an hour has closed) after; null = not known. */
	unexplainedBeforeMg: number | null;
	unexplainedAfterMg: number | null;
	driftingMg: number;
}

export interface Check {
	name: 'unexplained' | 'after_repeats_set' | 'offset_in_use' | 'noise' | 'readings';
	ok: boolean;
	says: string;
}

/** Kept with the film refresh and shown side by side. */
export interface Proof {
	filmLossMg: Vec3 | null;
	filmLossTotalMg: number | null;
	/** Of the healed field; over 100 when the film was flipped. */
	filmLossPercent: number | null;
	fieldBeforeMg: Vec3 | null;
	fieldAfterMg: Vec3;
	offsetBeforeMg: Vec3 | null;
	offsetAfterMg: Vec3;
	noiseBeforeMg: number | null;
	noiseAfterMg: number | null;
	unexplainedBeforeMg: number | null;
	unexplainedAfterMg: number;
	driftingMg: number;
	/** |B°| of the pair over |b_ref|; null without a reference. */
	gainRatio: number | null;
	readings: number;
	tempC: number | null;
	checks: Check[];
}

const mg = (value: number): string => `${value.toFixed(1)} mG`;
const AXES = [0, 1, 2] as const;

const medianField = (fields: readonly Vec3[]): Vec3 => [
	median(fields.map((v) => v[0])),
	median(fields.map((v) => v[1])),
	median(fields.map((v) => v[2]))
];

/** The largest of the three axes' noise. */
export function noiseOf(rows: readonly ProofRow[]): number | null {
	const noises = AXES.map((i) => differenceSigma(rows.map(({ rawMg }) => rawMg[i])));
	return noises.includes(null) ? null : Math.max(...(noises as number[]));
}

function filmOf(input: ProofInput, offset: Vec3, healed: Vec3) {
	if (input.before === null) return null;
	const before = fieldOf(input.before.rawMg, input.before.polarity, offset);
	const loss = subtract(before, healed);
	return { before, loss, percent: (100 * magnitude(loss)) / magnitude(healed) };
}

function gainOf(input: ProofInput, offset: Vec3, healed: Vec3) {
	const { reference, pulseTempC, sensitivityTempcoPerC } = input;
	if (reference === null) return null;
	const temp = pulseTempC ?? reference.tempC ?? 0;
	const atReference = fieldAtReference(
		healed,
		sensitivityTempcoPerC,
		temp,
		reference.tempC ?? temp
	);
	const quiet =
		reference.offsetMg === null ? subtract(reference.fieldMg, offset) : reference.fieldMg;
	return magnitude(atReference) / magnitude(quiet);
}

/** Largest distance on an axis between `after` and `set`, held against 4 sigma of a difference (method 2). */
function repeats({ setMg, afterMg }: ProofInput, sigmaMg: number, params: RefreshParams): Check {
	const name = 'after_repeats_set';
	if (afterMg === null)
		return { name, ok: false, says: 'no reading after the last pulse came with the pair' };
	const apartMg = Math.max(...AXES.map((i) => Math.abs(afterMg[i] - setMg[i])));
	const limitMg = Math.max(params.repeatLeastMg, params.repeatSigmas * sigmaMg);
	const ok = apartMg <= limitMg;
	return {
		name,
		ok,
		says: `the reading after lies ${mg(apartMg)} from the SET reading, ${ok ? 'within' : 'over'} ${mg(limitMg)}`
	};
}

function noiseCheck(before: number | null, after: number | null, params: RefreshParams): Check {
	const name = 'noise';
	if (after === null) return { name, ok: false, says: 'the noise after is not known' };
	if (before === null)
		return { name, ok: true, says: `noise ${mg(after)}; before not known, nothing to hold it to` };
	const limitMg = params.noiseRatio * Math.max(before, params.noiseFloorMg);
	const ok = after <= limitMg;
	return { name, ok, says: `noise ${mg(before)} before, ${mg(after)} after` };
}

/**
 * Before and after of a film refresh. Unexplained after: drift's own figure once an hour has closed since,
 * else by method 5 from the pair itself: it re-zeroes all causes, so what the still readings differ from its
 * field is unexplained.
 */
export function prove(input: ProofInput, params: RefreshParams): Proof {
	const offset = pairOffset(input.setMg, input.resetMg);
	const healed = pairField(input.setMg, input.resetMg);
	const fields = input.rowsAfter.map(({ rawMg, polarity }) => fieldOf(rawMg, polarity, offset));
	const level = fields.length === 0 ? healed : medianField(fields);
	const unexplainedAfterMg = input.unexplainedAfterMg ?? magnitude(subtract(level, healed));
	const noiseBeforeMg = noiseOf(input.rowsBefore) ?? input.reference?.sigmaMg ?? null;
	const noiseAfterMg = noiseOf(input.rowsAfter);
	const film = filmOf(input, offset, healed);
	const n = input.rowsAfter.length;
	const { driftingMg } = input;
	const still = unexplainedAfterMg < driftingMg;
	const checks: Check[] = [
		{
			name: 'unexplained',
			ok: still,
			says: `unexplained drift ${mg(unexplainedAfterMg)}, ${still ? 'under' : 'not under'} the drifting limit of ${mg(driftingMg)}`
		},
		repeats(input, noiseAfterMg ?? params.noiseFloorMg, params),
		{
			name: 'offset_in_use',
			ok: input.offsetTaken === true,
			says:
				input.offsetTaken === true
					? 'its offset is in use'
					: `its offset is not in use: ${input.offsetRefusal ?? 'not judged'}`
		},
		noiseCheck(noiseBeforeMg, noiseAfterMg, params),
		{
			name: 'readings',
			ok: n >= params.stillReadings,
			says: `${n} still readings of at least ${params.stillReadings}`
		}
	];
	return {
		filmLossMg: film?.loss ?? null,
		filmLossTotalMg: film === null ? null : magnitude(film.loss),
		filmLossPercent: film?.percent ?? null,
		fieldBeforeMg: film?.before ?? null,
		fieldAfterMg: level,
		offsetBeforeMg: input.offsetBeforeMg,
		offsetAfterMg: offset,
		noiseBeforeMg,
		noiseAfterMg,
		unexplainedBeforeMg: input.unexplainedBeforeMg,
		unexplainedAfterMg,
		driftingMg,
		gainRatio: gainOf(input, offset, healed),
		readings: n,
		tempC: input.pulseTempC,
		checks
	};
}

export interface Verdict {
	cured: boolean;
	words: string;
	/** No pulse cures it: a person should see it. */
	visit: boolean;
}

/** What the film had lost, in words. */
export function lossWords({ filmLossTotalMg, filmLossPercent }: Proof): string {
	if (filmLossTotalMg === null || filmLossPercent === null)
		return 'what the film had lost is not known: no reading before the pulse came';
	if (filmLossPercent > 100) return `the film was flipped (${mg(filmLossTotalMg)})`;
	return `the film had lost ${mg(filmLossTotalMg)} (${filmLossPercent.toFixed(1)} %)`;
}

export function verdictOf(proof: Proof, params: RefreshParams): Verdict {
	const failed = proof.checks.filter(({ ok }) => !ok);
	if (failed.length > 0)
		return {
			cured: false,
			words: `not cured: ${failed.map(({ says }) => says).join('; ')}`,
			visit: false
		};
	const off = proof.gainRatio === null ? 0 : Math.abs(proof.gainRatio - 1);
	if (off >= params.gainShare)
		return {
			cured: true,
			words: `film cured, gain or surroundings changed (${(100 * off).toFixed(1)} % off the reference): ${lossWords(proof)}`,
			visit: true
		};
	return { cured: true, words: `proved: ${lossWords(proof)}`, visit: false };
}
