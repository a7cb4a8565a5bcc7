import type { MailSettings } from '$lib/schemas/notices';
import * as audit from '$lib/server/store/queries/audit';
import type { Store } from '$lib/server/store/connect';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import type { Recipient } from './people';

type Own = Pick<Recipient, 'id' | 'email' | 'language' | 'timezone'>;

/** Keeps a person's own mail settings; switching all mail off is noted in the audit trail. */
export async function saveSettings(
	store: Store,
	person: Own,
	settings: MailSettings,
	nowMs: number
): Promise<void> {
	await store.db.transaction(async (tx) => {
		await mailPeople.save(
			tx,
			person.id,
			{
				paces: JSON.stringify(settings.paces),
				sites: settings.sites?.join(',') ?? null,
				...{ quietFromMin: settings.quietFromMin, quietToMin: settings.quietToMin },
				...{ quietWeekends: settings.quietWeekends, dailyAtMin: settings.dailyAtMin },
				...{ deputyId: settings.deputyId, offAtMs: settings.off ? nowMs : null }
			},
			{ language: person.language, timezone: person.timezone }
		);
		if (settings.off)
			await audit.note(
				tx,
				{ actor: `person:${person.id}`, what: 'mail.switched_off', subject: person.email },
				nowMs
			);
	});
}
