import type { Vec3 } from '$lib/magnetics/vector';
import { frameOf } from './frame';
import type { NodeDrift } from './node-drift';
import { Packer, Unpacker } from './packed';
import type { PairPoint } from './pairs';
import type { LineVerdict } from './site-line';
import type { SlopeState } from './slope';
import type { DriftReference, HourParts, Note } from './types';
import type { DayRecord, WatchState } from './watch';

/** What is remembered of one node between two hours. */
export interface DriftMemory {
	/** Which accepted reference it counts from (the caller's id). */
	referenceId: number;
	drift: NodeDrift;
	/** Newest pulse of any kind, clipped reading and reading over the film's limit; null = never. */
	film: {
		lastPulseAtMs: number | null;
		lastClippedAtMs: number | null;
		lastOverFilmAtMs: number | null;
	};
}

/** Most that a memory takes, whatever has happened (codec.test.ts fills every list). */
export const MEMORY_BYTES = 4096;
const LAYOUT = 1;
const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;
/** Days are kept as their distance from the newest in a byte; older ones have nothing to say. */
const OLDEST_DAY = 250;

const VERDICTS: readonly LineVerdict[] = ['known', 'few_nodes', 'cause_not_known'];
const NOTES: readonly Note[] = [
	'slope_not_known',
	'no_temperature',
	'no_pair',
	'few_nodes',
	'site_change_cause_not_known'
];
const BY = [null, 'level', 'cusum'] as const;

/** Notes as bits. */
export const noteBits = (notes: readonly Note[]): number =>
	notes.reduce((bits, note) => bits | (1 << NOTES.indexOf(note)), 0);
export const notesOf = (bits: number): Note[] => NOTES.filter((_, i) => (bits & (1 << i)) !== 0);

/** A stay is named by the second it began; 0 = vacant. */
const stayNumber = (stay: string | null): number => (stay === null ? 0 : Number(stay));
const stayName = (seconds: number): string | null => (seconds === 0 ? null : String(seconds));

/**
 * Packs a memory into at most 4096 bytes. What it keeps is coarser than what was worked out (0.001 mG, 0.01 °C;
 * daily medians 0.05 mG): go on from `unpackMemory` of it always, and a rebuild gives the same bytes.
 */
export function packMemory({ referenceId, drift, film }: DriftMemory): Uint8Array {
	const p = new Packer(2 * MEMORY_BYTES);
	p.u8(LAYOUT);
	p.u32(referenceId);
	putReference(p, drift.reference);
	p.f32(drift.tempcoPerC);
	putSlopes(p, drift.slopeState);
	p.optional(drift.slope, ({ perC, errorPerC, triples }) => {
		p.slope(perC);
		p.slope(errorPerC);
		p.u32(triples);
	});
	const { vacant, any, kept, offsetPerC } = drift.pairs;
	p.optional(vacant, (pair) => putPair(p, pair));
	p.optional(any, (pair) => putPair(p, pair));
	p.list(kept, (pair) => putPair(p, pair));
	p.optional(offsetPerC, (slope) => p.slope(slope));
	putWatch(p, drift.watch);
	p.field(drift.geomagneticMg);
	p.u8(VERDICTS.indexOf(drift.line));
	p.optional(drift.stay, ({ stay, levelMg, tempC, lineMg }) => {
		p.u32(stayNumber(stay));
		p.field(levelMg);
		p.tempC(tempC);
		p.field(lineMg);
	});
	p.optional(drift.last, (parts) => putParts(p, parts));
	for (const atMs of [film.lastPulseAtMs, film.lastClippedAtMs, film.lastOverFilmAtMs])
		p.f64OrNull(atMs);
	return p.bytes();
}

/** Throws RangeError for a layout that this version does not know. */
export function unpackMemory(bytes: Uint8Array): DriftMemory {
	const u = new Unpacker(bytes);
	if (u.u8() !== LAYOUT) throw new RangeError('Drift memory of another layout.');
	const referenceId = u.u32();
	const reference = takeReference(u);
	const tempcoPerC = u.f32();
	const slopeState = takeSlopes(u);
	const slope = u.optional(() => ({
		perC: u.slope(),
		errorPerC: u.slope(),
		triples: u.u32()
	}));
	const pairs = {
		vacant: u.optional(() => takePair(u)),
		any: u.optional(() => takePair(u)),
		kept: u.list(() => takePair(u)),
		offsetPerC: u.optional(() => u.slope())
	};
	const drift: NodeDrift = {
		reference,
		tempcoPerC,
		frame: reference.offsetMg === null ? null : frameOf(reference.fieldMg),
		slopeState,
		slope,
		pairs,
		watch: takeWatch(u),
		geomagneticMg: u.field(),
		line: VERDICTS[u.u8()] ?? 'few_nodes',
		stay: u.optional(() => ({
			stay: stayName(u.u32()) ?? '0',
			levelMg: u.field(),
			tempC: u.tempC() ?? 0,
			lineMg: u.field()
		})),
		last: u.optional(() => takeParts(u))
	};
	const film = {
		lastPulseAtMs: u.f64OrNull(),
		lastClippedAtMs: u.f64OrNull(),
		lastOverFilmAtMs: u.f64OrNull()
	};
	return { referenceId, drift, film };
}

function putReference(p: Packer, reference: DriftReference): void {
	p.f64(reference.atMs);
	p.field(reference.fieldMg);
	p.optional(reference.offsetMg, (v) => p.field(v));
	p.tempC(reference.tempC);
	p.optional(reference.lineMg ?? null, (v) => p.field(v));
}

function takeReference(u: Unpacker): DriftReference {
	const atMs = u.f64();
	const fieldMg = u.field();
	const offsetMg = u.optional(() => u.field());
	const tempC = u.tempC();
	const lineMg = u.optional(() => u.field());
	return { atMs, fieldMg, offsetMg, tempC, ...(lineMg === null ? {} : { lineMg }) };
}

/** Days as distances from the newest; those too far back are left behind. */
function recentDays<T>(items: readonly T[], dayMs: (item: T) => number): T[] {
	const newest = items.at(-1);
	if (newest === undefined) return [];
	return items.filter((item) => dayMs(newest) - dayMs(item) <= OLDEST_DAY * DAY_MS);
}

function putSlopes(p: Packer, { recent, hours, days }: SlopeState): void {
	const lastMs = recent.at(-1)?.hourMs ?? 0;
	p.hour(lastMs === 0 ? null : lastMs);
	p.list(recent, ({ hourMs, levelMg, tempC, stay }) => {
		p.u8((lastMs - hourMs) / HOUR_MS);
		p.field(levelMg);
		p.tempC(tempC);
		p.u32(stayNumber(stay));
	});
	const hourMs = hours[0]?.atMs ?? null;
	p.hour(hourMs);
	p.list(hours, ({ atMs, perC, weight, triples }) => {
		p.u8((atMs - (hourMs ?? atMs)) / HOUR_MS);
		p.slope(perC);
		p.f32(weight);
		p.u16(triples);
	});
	const kept = recentDays(days, ({ atMs }) => atMs);
	const newestMs = kept.at(-1)?.atMs ?? null;
	p.hour(newestMs);
	p.list(kept, ({ atMs, perC, weight, triples }) => {
		p.u8(((newestMs ?? atMs) - atMs) / DAY_MS);
		p.slope(perC);
		p.f32(weight);
		p.u16(triples);
	});
}

function takeSlopes(u: Unpacker): SlopeState {
	const lastMs = u.hour() ?? 0;
	const recent = u.list(() => ({
		hourMs: lastMs - u.u8() * HOUR_MS,
		levelMg: u.field(),
		tempC: u.tempC() ?? 0,
		stay: stayName(u.u32())
	}));
	const batch = (atMs: number) => ({
		atMs,
		perC: u.slope(),
		weight: u.f32(),
		triples: u.u16()
	});
	const firstMs = u.hour() ?? 0;
	const hours = u.list(() => batch(firstMs + u.u8() * HOUR_MS));
	const newestMs = u.hour() ?? 0;
	const days = u.list(() => batch(newestMs - u.u8() * DAY_MS));
	return { recent, hours, days };
}

function putPair(p: Packer, pair: PairPoint): void {
	p.seconds(pair.atMs);
	p.field(pair.fieldMg);
	p.field(pair.offsetMg);
	p.tempC(pair.tempC);
	p.daily(pair.geomagneticMg);
}

const takePair = (u: Unpacker): PairPoint => ({
	atMs: u.seconds(),
	fieldMg: u.field(),
	offsetMg: u.field(),
	tempC: u.tempC() ?? 0,
	geomagneticMg: u.daily()
});

function putWatch(p: Packer, w: WatchState): void {
	for (const hours of [w.overHours, w.refreshHours, w.underHours]) p.u16(hours);
	for (const atMs of [w.beganMs, w.driftingSinceMs, w.refreshBeganMs]) p.hour(atMs);
	p.u8(BY.indexOf(w.driftingBy));
	for (const { high, low } of w.cusum) {
		p.f32(high);
		p.f32(low);
	}
	p.optional(w.centre, ({ zeroMg, sigmaMg }) => {
		p.optional(zeroMg, (v) => p.floats(v));
		p.floats(sigmaMg);
	});
	p.u32(w.segment);
	p.u32(w.run);
	p.optional(w.today, ({ dayMs, unexplained, movement }) => {
		p.hour(dayMs);
		p.list(unexplained, (v) => p.daily(v));
		p.list(movement, (v) => p.daily(v));
	});
	const days = recentDays(w.days, ({ dayMs }) => dayMs);
	const newestMs = days.at(-1)?.dayMs ?? null;
	p.hour(newestMs);
	p.list(days, (day) => {
		p.u8(((newestMs ?? day.dayMs) - day.dayMs) / DAY_MS);
		p.daily(day.unexplainedMg);
		p.daily(day.movementMg);
		p.u8(day.hours);
		p.u8(w.segment - day.segment);
		p.u8(w.run - day.run);
	});
}

function takeWatch(u: Unpacker): WatchState {
	const [overHours, refreshHours, underHours] = [u.u16(), u.u16(), u.u16()];
	const [beganMs, driftingSinceMs, refreshBeganMs] = [u.hour(), u.hour(), u.hour()];
	const driftingBy = BY[u.u8()] ?? null;
	const sums = () => ({ high: u.f32(), low: u.f32() });
	const cusum = [sums(), sums(), sums()] as const;
	const centre = u.optional(() => ({ zeroMg: u.optional(() => u.floats()), sigmaMg: u.floats() }));
	const [segment, run] = [u.u32(), u.u32()];
	const today = u.optional(() => ({
		dayMs: u.hour() ?? 0,
		unexplained: u.list(() => u.daily()),
		movement: u.list(() => u.daily())
	}));
	const newestMs = u.hour() ?? 0;
	const days = u.list((): DayRecord => ({
		dayMs: newestMs - u.u8() * DAY_MS,
		unexplainedMg: u.daily(),
		movementMg: u.daily(),
		hours: u.u8(),
		segment: segment - u.u8(),
		run: run - u.u8()
	}));
	return {
		...{ overHours, refreshHours, underHours, beganMs, driftingSinceMs, driftingBy },
		...{ refreshBeganMs, cusum, centre, today, days, segment, run }
	};
}

const PARTS = [
	'totalMg',
	'temperatureMg',
	'geomagneticMg',
	'bridgeMg',
	'filmMg',
	'surroundingsMg',
	'unexplainedMg'
] as const satisfies readonly (keyof HourParts)[];

function putParts(p: Packer, parts: HourParts): void {
	p.hour(parts.hourMs);
	p.tempC(parts.tempC);
	for (const name of PARTS) p.field(parts[name]);
	p.optional(parts.errorMg, (v) => p.floats(v));
	p.u8(noteBits(parts.notes));
}

function takeParts(u: Unpacker): HourParts {
	const hourMs = u.hour() ?? 0;
	const tempC = u.tempC();
	const vectors = Object.fromEntries(PARTS.map((name) => [name, u.field()])) as Record<
		(typeof PARTS)[number],
		Vec3
	>;
	const errorMg = u.optional(() => u.floats());
	return { hourMs, tempC, ...vectors, errorMg, notes: notesOf(u.u8()) };
}
