import { z } from 'zod';
import { condition } from './v1/bays';
import { code, instant, mg, serial, vectorMg } from './v1/common';
import { driftCause, driftNote, driftVectors, refreshReason } from './v1/drift';

/** What the Drift board, the dossier and the plan's arrows read (routes below /api/desk, people only). */

const days = z.strictObject({
	limitMg: mg.meta({ description: 'The next limit ahead: drifting, then film refresh.' }),
	from: z.number().min(0).meta({ description: 'Days, earliest.' }),
	to: z.number().min(0).nullable().meta({ description: 'Days, latest; null: may never come.' })
});

/** Where the field of the node has gone: what neither temperature, geomagnetic change nor bridge explains. */
export const driftArrow = z.strictObject({
	fieldMg: vectorMg,
	lengthMg: mg,
	/** Level part; the direction only where the node's heading is entered. */
	levelMg: mg,
	bearingDeg: z.number().nullable().meta({ description: 'East of true north; null: not entered.' }),
	/** Positive = down. */
	downMg: mg
});
export type DriftArrow = z.infer<typeof driftArrow>;

export const driftRow = z.strictObject({
	serial,
	bay: code,
	zone: code,
	condition,
	also: z.array(z.string()),
	/** Begin of the last hour that was judged; null: none yet. */
	hour: instant.nullable(),
	/** Lengths, mG; null before the first judged hour. */
	partsMg: z
		.strictObject({
			total: mg,
			temperature: mg,
			geomagnetic: mg,
			bridge: mg,
			film: mg,
			surroundings: mg,
			unexplained: mg
		})
		.nullable(),
	/** Unexplained less 2 standard errors: what the limits are held against; null = it cannot be judged. */
	sureMg: mg.nullable(),
	vectors: driftVectors.nullable(),
	cause: z
		.strictObject({ cause: driftCause, magnitudeMg: mg, says: z.string(), ordinary: z.boolean() })
		.nullable()
		.meta({ description: 'ordinary: temperature or geomagnetic, which is taken out.' }),
	next: z.string().meta({ description: 'The next step in words.' }),
	notes: z.array(z.strictObject({ note: driftNote, says: z.string() })),
	drifting: z.strictObject({ since: instant, by: z.enum(['level', 'cusum']) }).nullable(),
	refresh: z.strictObject({
		due: z.boolean(),
		reasons: z.array(z.strictObject({ reason: refreshReason, since: instant, says: z.string() }))
	}),
	visit: z.array(z.string()).meta({ description: 'What no pulse cures, in words.' }),
	ratePerDayMg: mg.nullable(),
	trend: z.boolean().meta({ description: 'Whether the rate is more than chance (Mann–Kendall).' }),
	daysToLimit: days.nullable(),
	arrow: driftArrow.nullable(),
	lastPairAt: instant.nullable()
});
export type DriftRow = z.infer<typeof driftRow>;

/** One closed hour of the site: change since the references, along the horizontal field, across it, vertical. */
export const linePoint = z.strictObject({
	at: instant,
	verdict: z.enum(['known', 'few_nodes', 'cause_not_known']),
	changeMg: z.tuple([mg, mg, mg]).nullable().meta({ description: '[h, e, z]; null: not known.' }),
	spreadMg: mg.nullable(),
	nodes: z.int()
});

/** Range of the more disturbed horizontal component over 3 h of UTC, from hourly values: a lower bound of K. */
export const kRange = z.strictObject({ from: instant, to: instant, rangeMg: mg, k: z.int() });

export const driftBoard = z.strictObject({
	pairRule: z.enum(['calibrate', 'diagnose', 'never']),
	limits: z.strictObject({ driftingMg: mg, refreshMg: mg, refreshHours: z.number() }),
	/** End of the last closed hour of the site; null: none yet. */
	closedTo: instant.nullable(),
	headingsEntered: z.boolean().meta({ description: 'At least one arrow has a direction.' }),
	/** Ranked: film refresh due, drifting, then by what is sure of unexplained. */
	rows: z.array(driftRow),
	line: z.strictObject({
		points: z.array(linePoint),
		kRanges: z.array(kRange),
		/** Lower limits of K 0 … 9 in mG of a 3-hour range (check-values 8a). */
		kLimitsMg: z.array(mg)
	})
});
export type DriftBoard = z.infer<typeof driftBoard>;

const axisChart = z.strictObject({
	/** Daily medians of unexplained on this axis, and their EWMA. */
	valuesMg: z.array(mg),
	averagesMg: z.array(mg),
	lowerMg: mg,
	upperMg: mg
});

export const driftHour = z.strictObject({
	at: instant,
	tempC: z.number().nullable(),
	n: z.int(),
	/** Occupied hours teach the slope within one stay; they have no parts. */
	occupied: z.boolean(),
	vectors: driftVectors.nullable(),
	errorMg: vectorMg.nullable(),
	notes: z.array(driftNote)
});

export const driftPair = z.strictObject({
	at: instant,
	vacant: z.boolean(),
	/** 'calibrate', 'diagnose', 'ask', 'refresh:<id>' …; null: nobody ordered it over this server. */
	cause: z.string().nullable(),
	tempC: z.number().nullable(),
	fieldMg: vectorMg,
	offsetMg: vectorMg,
	/** What the film had lost; null: the reading before the pulse did not come. */
	filmMg: vectorMg.nullable(),
	filmShare: z.number().nullable(),
	bridgeChangeMg: vectorMg.nullable(),
	surroundingsChangeMg: vectorMg.nullable(),
	named: z.strictObject({ cause: driftCause, magnitudeMg: mg, says: z.string() }).nullable()
});
export type DriftPair = z.infer<typeof driftPair>;

export const nodeDriftView = z.strictObject({
	serial,
	site: code,
	row: driftRow.nullable().meta({ description: 'As on the board; null while it lies in no bay.' }),
	limits: z.strictObject({ driftingMg: mg, refreshMg: mg, refreshHours: z.number() }),
	reference: z
		.strictObject({
			at: instant,
			fieldMg: vectorMg,
			offsetMg: vectorMg.nullable(),
			tempC: z.number().nullable()
		})
		.nullable(),
	slope: z
		.strictObject({ perC: vectorMg, errorPerC: vectorMg, triples: z.int() })
		.nullable()
		.meta({ description: 'mG/°C of field plus offset; null: not known yet.' }),
	/** Oldest first, at most `hours` of the query. */
	hours: z.array(driftHour),
	/** EWMA charts for people, by axis; null under 5 days. */
	chart: z
		.strictObject({
			days: z.array(instant),
			x: axisChart,
			y: axisChart,
			z: axisChart
		})
		.nullable(),
	/** Field plus offset less that of the reference, vacant hours with a temperature: [°C, mG, mG, mG]. */
	scatter: z.array(z.tuple([z.number(), mg, mg, mg])),
	pairs: z.array(driftPair).meta({ description: 'Accepted pairs, newest first.' })
});
export type NodeDriftView = z.infer<typeof nodeDriftView>;

export const nodeDriftQuery = z.strictObject({
	hours: z.coerce
		.number()
		.int()
		.min(24)
		.max(24 * 90)
		.default(24 * 14)
});

export const driftBoardQuery = z.strictObject({
	/** How far back the site's line goes. */
	lineHours: z.coerce
		.number()
		.int()
		.min(24)
		.max(24 * 60)
		.default(24 * 14)
});
