import { z } from 'zod';
import { code, cursorIn, instant, list, mg, page, serial, vectorMg } from './common';

/** The lifecycle of a film refresh (method.md 7). */
export const refreshState = z.enum([
	'asked',
	'approved',
	'waiting',
	'sent',
	'obeyed',
	'measured',
	'proved',
	'not_cured',
	'refused',
	'expired',
	'called_off'
]);
const actor = z.enum(['person', 'key', 'rule', 'node']);

export const refreshProof = z.strictObject({
	filmLossMg: vectorMg.nullable(),
	filmLossTotalMg: mg.nullable(),
	filmLossPercent: z.number().nullable().meta({
		description: 'Of the healed field; over 100 when the film was flipped.'
	}),
	fieldBeforeMg: vectorMg.nullable(),
	fieldAfterMg: vectorMg,
	offsetBeforeMg: vectorMg.nullable(),
	offsetAfterMg: vectorMg,
	noiseBeforeMg: mg.nullable(),
	noiseAfterMg: mg.nullable(),
	unexplainedBeforeMg: mg.nullable(),
	unexplainedAfterMg: mg,
	driftingMg: mg.meta({ description: 'The drifting limit that unexplained must stay under.' }),
	gainRatio: z.number().nullable().meta({
		description: 'Healed field over the reference, at reference temperature.'
	}),
	readings: z.int(),
	tempC: z.number().nullable(),
	checks: z.array(
		z.strictObject({
			name: z.enum(['unexplained', 'after_repeats_set', 'offset_in_use', 'noise', 'readings']),
			ok: z.boolean(),
			says: z.string()
		})
	)
});

export const refreshSummary = z.strictObject({
	id: z.int(),
	site: code,
	node: serial,
	bay: code,
	state: refreshState,
	origin: z.enum(['person', 'key', 'schedule', 'pair_rule']),
	reason: z.string(),
	askedAt: instant,
	approvedAt: instant.nullable(),
	waiting: z
		.strictObject({ for: z.string(), since: instant })
		.nullable()
		.meta({ description: 'What holds it back now.' }),
	sentAt: instant.nullable(),
	obeyedAt: instant.nullable(),
	pulseAt: instant.nullable(),
	stillReadings: z.int(),
	verdict: z.string().nullable(),
	visitWanted: z.boolean(),
	endedAt: instant.nullable()
});

export const refreshView = z.strictObject({
	...refreshSummary.shape,
	transitions: z.array(
		z.strictObject({
			from: refreshState.nullable(),
			to: refreshState,
			by: actor,
			why: z.string(),
			at: instant
		})
	),
	proof: refreshProof.nullable()
});
export const refreshList = list(refreshSummary, {});

const reason = z.string().trim().min(1).max(400);
export const refreshIn = z.strictObject({
	reason: reason.optional().meta({ description: 'Why; kept with the order.' })
});
export const callOffIn = z.strictObject({ reason: reason.optional() });
export const refreshQuery = z.strictObject({
	site: code.optional(),
	state: refreshState.optional(),
	limit: page.limit,
	cursor: cursorIn.optional()
});
