import { z } from 'zod';
import { code, instant, list } from './common';

const timezone = z.string().max(64).refine(isTimezone, {
	message: 'must be an IANA time zone, for instance Etc/UTC'
});

function isTimezone(text: string): boolean {
	try {
		// The result is used, so that no bundler takes the call for one without effect.
		return new Intl.DateTimeFormat('en', { timeZone: text }).resolvedOptions().timeZone !== '';
	} catch {
		return false;
	}
}

const described = {
	name: z.string().trim().min(1).max(120),
	lat: z.number().min(-90).max(90).meta({ description: 'Degrees north, WGS 84.' }),
	lon: z.number().min(-180).max(180).meta({ description: 'Degrees east, WGS 84.' }),
	altitudeM: z.number().min(-500).max(9000),
	timezone
};

export const siteIn = z.strictObject({
	slug: code,
	...described,
	altitudeM: described.altitudeM.default(0)
});
export type SiteIn = z.infer<typeof siteIn>;

export const sitePatch = z.strictObject(described).partial();
export type SitePatch = z.infer<typeof sitePatch>;

export const siteView = z.strictObject({ slug: code, ...described, demo: z.boolean() });

const count = z.int().min(0);
/** `doubtful` counts bays with `doubt`; closed bays are in none of the states. */
export const counts = z.strictObject({
	bays: count,
	occupied: count,
	vacant: count,
	unknown: count,
	closed: count,
	doubtful: count
});
export type Counts = z.infer<typeof counts>;

/** Totals of fewer than five bays that include a personal one are withheld: null. */
const withheld = counts
	.nullable()
	.meta({ description: 'null where fewer than five bays include a personal one.' });

export const siteWithCounts = z.strictObject({
	...siteView.shape,
	counts: withheld,
	zones: z.array(z.strictObject({ code, name: z.string(), counts: withheld }))
});

export const siteList = list(siteView, {});

export const live = z.strictObject({
	status: z.enum(['live', 'late', 'lost']),
	asOf: instant.meta({ description: 'When a node of the site was last heard.' }),
	lateSince: instant.nullable(),
	nodesHeard: z.int(),
	nodesExpected: z.int()
});
export type Live = z.infer<typeof live>;
