import { z } from 'zod';
import { code } from './v1/common';
import { spec } from './v1/spec';

const everyday = ['operator', 'maintenance', 'admin'] as const;
const fitters = ['maintenance', 'admin'] as const;
const reason = z.string().trim().min(1).max(400);
const minute = z.int().min(0).max(1439);

const which = z.union([
	z.strictObject({ zone: code }),
	z.strictObject({ bays: z.array(code).min(1).max(2000) })
]);

export const refreshSettingsIn = z.strictObject({
	ownApproval: z.boolean(),
	mostAtOnce: z.int().min(1).max(50),
	holdOffH: z.int().min(1).max(336),
	scheduleOn: z.boolean(),
	scheduleReasons: z.array(z.enum(['inverted', 'strong_field', 'unexplained'])),
	mostANight: z.int().min(1).max(500),
	quietFromMin: minute,
	quietToMin: minute,
	pairRule: z.enum(['calibrate', 'diagnose', 'never'])
});
export type RefreshSettingsIn = z.infer<typeof refreshSettingsIn>;

/** Rules of the routes behind the sheet 'Film refreshes'; no key reaches them. */
export const DESK_REFRESH_ROUTES = {
	sheet: spec({
		summary: 'Everything on the sheet: what is open, what ended lately, bulk orders, settings',
		scope: null,
		roles: everyday
	}),
	one: spec({
		summary: 'One film refresh: who, when and why of every step, and the proof',
		scope: null,
		roles: everyday
	}),
	decide: spec({
		summary: 'Approve or refuse',
		scope: null,
		roles: fitters,
		body: z.discriminatedUnion('deed', [
			z.strictObject({ deed: z.literal('approve'), anyHour: z.boolean() }),
			z.strictObject({ deed: z.literal('refuse'), reason })
		])
	}),
	preview: spec({
		summary: 'Who would be taken by a bulk order, who not and why, and what it costs',
		scope: null,
		roles: everyday,
		body: which
	}),
	bulk: spec({
		summary: 'Ask for many film refreshes together',
		scope: null,
		roles: everyday,
		body: z.strictObject({ which, reason }),
		status: 201
	}),
	bulkDeed: spec({
		summary: 'Approve, pause, go on with or call off a bulk order',
		scope: null,
		roles: fitters,
		body: z.strictObject({
			deed: z.enum(['approve', 'pause', 'go_on', 'call_off']),
			anyHour: z.boolean().default(false)
		})
	}),
	settings: spec({
		summary: "Change the site's rules on pulses",
		scope: null,
		roles: fitters,
		body: refreshSettingsIn
	})
} as const;
