import { z } from 'zod';
import type { Role } from './roles';

/** What a notice can tell of, the most serious first. */
export const NOTICE_KINDS = [
	'site_late',
	'mail_failing',
	'silent',
	'inverted',
	'clipped',
	'refresh_not_cured',
	'refresh_due',
	'drifting',
	'reference_vehicle',
	'low_cell',
	'rejected_frames',
	'clock_off'
] as const;
export type NoticeKind = (typeof NOTICE_KINDS)[number];

/** What a notice knows beyond its kind; everything is optional, units in the names. */
export const noticeFacts = z.object({
	/** Of many: how many of how many, by what they share. */
	count: z.number().optional(),
	of: z.number().optional(),
	shared: z.enum(['site', 'gateway', 'network', 'zone']).optional(),
	label: z.string().optional(),
	/** Codes of the first bays concerned. */
	bays: z.array(z.string()).optional(),
	heardAtMs: z.number().optional(),
	batteryMv: z.number().optional(),
	/** Frames refused in the last day and the commonest reason. */
	refused: z.number().optional(),
	refusedWhy: z.string().optional(),
	/** What the mail server said, and of how many mails. */
	reply: z.string().optional(),
	address: z.string().optional(),
	/** What moved it as drift names it, unless only what is always taken out; and how far. */
	cause: z.string().optional(),
	causeMg: z.number().optional(),
	/** Why a film refresh is due (refreshes/settings.ts). */
	reasons: z.array(z.string()).optional(),
	/** Limits of this node: drifting, film refresh due. */
	limitsMg: z.array(z.number()).optional(),
	unexplainedMg: z.number().optional(),
	rateMgPerDay: z.number().optional(),
	daysLeftLo: z.number().optional(),
	daysLeftHi: z.number().optional()
});
export type NoticeFacts = z.infer<typeof noticeFacts>;

/** When a person is mailed of a kind. */
export const PACES = ['at_once', 'hourly', 'daily', 'never'] as const;
export const pace = z.enum(PACES);
export type Pace = z.infer<typeof pace>;
export type Paces = Record<NoticeKind, Pace>;

const minuteOfDay = z.number().int().min(0).max(1439);

/** A person's mail settings, as kept. */
export const mailSettings = z.strictObject({
	paces: z.record(z.enum(NOTICE_KINDS), pace),
	/** null: every site within reach. */
	sites: z.array(z.number().int().positive()).nullable(),
	/** Local minutes of the day; equal = no quiet hours. */
	quietFromMin: minuteOfDay,
	quietToMin: minuteOfDay,
	quietWeekends: z.boolean(),
	dailyAtMin: minuteOfDay,
	deputyId: z.number().int().positive().nullable(),
	/** Nothing is mailed: one-click unsubscribe. */
	off: z.boolean()
});
export type MailSettings = z.infer<typeof mailSettings>;

const paces = (atOnce: NoticeKind[], daily: NoticeKind[]): Paces =>
	Object.fromEntries(
		NOTICE_KINDS.map((kind) => [
			kind,
			atOnce.includes(kind) ? 'at_once' : daily.includes(kind) ? 'daily' : 'never'
		])
	) as Paces;

/** What each role is mailed until the person says otherwise. Escalations reach a person all the same. */
export const ROLE_PACES: Record<Role, Paces> = {
	maintenance: paces(
		[
			'site_late',
			'silent',
			'inverted',
			'clipped',
			'refresh_not_cured',
			'refresh_due',
			'reference_vehicle'
		],
		['drifting', 'low_cell', 'rejected_frames', 'clock_off']
	),
	operator: paces(['site_late'], ['reference_vehicle']),
	integrator: paces([], []),
	admin: paces(['site_late', 'mail_failing'], [])
};

export const defaultSettings = (role: Role): MailSettings => ({
	paces: ROLE_PACES[role],
	sites: null,
	quietFromMin: 19 * 60,
	quietToMin: 7 * 60,
	quietWeekends: true,
	dailyAtMin: 7 * 60,
	deputyId: null,
	off: false
});

export const SNOOZE_MAX_DAYS = 30;

/** What people do with notices; the ids are those selected. */
const ids = z
	.array(z.coerce.number().int().positive())
	.min(1, 'Select at least one notice.')
	.max(1000);
export const noticeAct = z.discriminatedUnion('act', [
	z.object({ act: z.literal('take'), ids }),
	z.object({ act: z.literal('give_back'), ids }),
	z.object({
		act: z.literal('hand'),
		ids,
		to: z.coerce.number().int().positive('Choose a person.')
	}),
	z.object({
		act: z.literal('snooze'),
		ids,
		/** Wall time at the site, '2026-03-03T07:55'. */
		until: z.string().regex(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}$/, 'Say until when.')
	}),
	z.object({
		act: z.literal('comment'),
		ids,
		text: z.string().trim().min(1, 'Write a comment.').max(500, 'A comment has 500 characters.')
	})
]);
export type NoticeAct = z.infer<typeof noticeAct>;
