import { z } from 'zod';
import { isLanguage } from '$lib/format/messages';
import { mailSheetWords } from '$lib/format/messages/mail-sheets';
import { NOTICE_KINDS, PACES, type MailSettings } from '$lib/schemas/notices';

const clock = z
	.string()
	.regex(/^([01]\d|2[0-3]):[0-5]\d$/, { error: () => mailSheetWords().settings.wrongTime })
	.transform((text) => Number(text.slice(0, 2)) * 60 + Number(text.slice(3)));

const ZONES = new Set(Intl.supportedValuesOf('timeZone'));

const form = z.object({
	paces: z.record(z.enum(NOTICE_KINDS), z.enum(PACES)),
	allSites: z.boolean(),
	sites: z.array(z.coerce.number().int().positive()),
	quietFrom: clock,
	quietTo: clock,
	quietWeekends: z.boolean(),
	dailyAt: clock,
	deputy: z
		.string()
		.transform((text) => (text === '' ? null : Number(text)))
		.pipe(
			z
				.number({ error: () => mailSheetWords().settings.wrongDeputy })
				.int()
				.positive()
				.nullable()
		),
	timezone: z.string().refine((zone) => zone === '' || zone === 'UTC' || ZONES.has(zone), {
		error: () => mailSheetWords().settings.wrongZone
	}),
	language: z.string().refine(isLanguage, { error: () => mailSheetWords().settings.wrongLanguage }),
	on: z.boolean()
});

const textOf = (data: FormData, name: string): string => {
	const value = data.get(name);
	return typeof value === 'string' ? value : '';
};

/** The settings sheet's form, checked. */
export function mailForm(data: FormData) {
	return form.safeParse({
		paces: Object.fromEntries(NOTICE_KINDS.map((kind) => [kind, textOf(data, `pace-${kind}`)])),
		allSites: data.get('all') === 'on',
		sites: data.getAll('site'),
		...{ quietFrom: textOf(data, 'quietFrom'), quietTo: textOf(data, 'quietTo') },
		...{ dailyAt: textOf(data, 'dailyAt'), quietWeekends: data.get('quietWeekends') === 'on' },
		...{ deputy: textOf(data, 'deputy'), timezone: textOf(data, 'timezone') },
		language: textOf(data, 'language'),
		on: data.get('on') === 'on'
	});
}

export function settingsFrom(given: z.infer<typeof form>): {
	settings: MailSettings;
	timezone: string | null;
	language: string;
} {
	return {
		settings: {
			paces: given.paces,
			sites: given.allSites ? null : given.sites,
			...{ quietFromMin: given.quietFrom, quietToMin: given.quietTo },
			...{ quietWeekends: given.quietWeekends, dailyAtMin: given.dailyAt },
			...{ deputyId: given.deputy, off: !given.on }
		},
		timezone: given.timezone === '' ? null : given.timezone,
		language: given.language
	};
}
