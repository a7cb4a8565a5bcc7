import { z } from 'zod';
import { instant, mg, vectorMg } from './common';

export const driftCause = z.enum([
	'temperature',
	'geomagnetic',
	'bridge',
	'film',
	'gain_or_field',
	'tilt',
	'steel_or_works',
	'unexplained'
]);
export const driftNote = z.enum([
	'slope_not_known',
	'no_temperature',
	'no_pair',
	'few_nodes',
	'site_change_cause_not_known'
]);
export const refreshReason = z.enum(['clipped', 'over_film_limit', 'inverted', 'unexplained']);

/** What the level has moved since the reference, by cause; the parts add up to the total. */
export const driftVectors = z.strictObject({
	totalMg: vectorMg,
	temperatureMg: vectorMg,
	geomagneticMg: vectorMg,
	bridgeMg: vectorMg,
	filmMg: vectorMg.meta({ description: 'Film loss that a pulse has measured since.' }),
	surroundingsMg: vectorMg,
	unexplainedMg: vectorMg
});

export const driftHours = z.strictObject({
	at: instant.meta({ description: 'Begin of the hour.' }),
	tempC: z.number().nullable(),
	n: z.int().meta({ description: 'Still readings of the empty bay behind it.' }),
	unexplainedMg: mg.meta({ description: 'Length of the unexplained vector.' }),
	vectors: driftVectors
});

export const nodeDrift = z.strictObject({
	/** Lengths of the vectors. */
	sinceReference: z
		.strictObject({
			totalMg: mg,
			temperatureMg: mg,
			geomagneticMg: mg,
			bridgeMg: mg,
			filmMg: mg,
			surroundingsMg: mg,
			unexplainedMg: mg
		})
		.nullable()
		.meta({ description: 'Null before the first closed hour with an accepted reference.' }),
	vectors: driftVectors.nullable(),
	ratePerDayMg: mg.nullable().meta({ description: 'Null under 5 days of daily medians.' }),
	daysToLimit: z
		.strictObject({ limitMg: mg, from: z.number(), to: z.number().nullable() })
		.nullable()
		.meta({ description: 'A range, earliest to latest; `to` null: it may never come.' }),
	drifting: z.strictObject({ since: instant, by: z.enum(['level', 'cusum']) }).nullable(),
	refresh: z.strictObject({
		due: z.boolean(),
		reasons: z.array(z.strictObject({ reason: refreshReason, since: instant }))
	}),
	cause: z.strictObject({ cause: driftCause, magnitudeMg: mg }).nullable(),
	notes: z.array(driftNote).meta({ description: 'Why the last hour is judged with less.' }),
	hours: z.array(driftHours).meta({ description: 'The last 14 days or as asked, oldest first.' })
});

const hours = (most: number, fallback: number) =>
	z.coerce.number().int().min(1).max(most).default(fallback);

export const nodeDriftQuery = z.strictObject({ hours: hours(24 * 90, 24 * 14) });
