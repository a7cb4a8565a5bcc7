import { area } from './index';

const many = (n: number, one: string, several: string): string => `${n} ${n === 1 ? one : several}`;

/** Sheets 'Mail' and 'Mail settings', and the two pages that a mail leads to without signing in. */
export const mailSheetWords = area(
	{
		mail: {
			heading: 'Caught mail',
			subject: 'Subject',
			from: 'From',
			to: 'To',
			caught: 'Caught',
			empty: 'No mail yet.',
			outside: 'Mail goes to the server that SMTP_URL names; only the demo’s is caught here.',
			inside: 'Without SMTP_URL every mail is caught here and goes nowhere else.',
			notSent: (n: number) => `Not sent, ${n}`,
			aMail: 'a mail',
			toWhom: (address: string) => `, to ${address}`,
			tried: (n: number, again: string) => `tried ${many(n, 'time', 'times')}, again ${again}`,
			givenUp: (at: string, n: number) => `given up ${at} after ${many(n, 'try', 'tries')}`,
			serverSays: (reply: string) => `; the mail server says: ${reply}`,
			links: 'Mails hold one-time links: whoever reads one can use it.',
			parts: 'Parts of the mail',
			drawn: 'As drawn',
			text: 'As text',
			headers: 'Headers',
			frame: (subject: string) => `The mail as drawn: ${subject}`,
			noHtml: 'This mail has no drawn part.',
			safe: 'Shown without scripts; nothing is loaded from elsewhere.'
		},
		settings: {
			heading: 'What is mailed to you',
			to: (address: string, role: string) => `To ${address}; you are ${role}.`,
			on: 'Mail of notices',
			onHint: 'off: nothing is mailed, escalations neither',
			kinds: 'Kinds',
			kindsWhy:
				'At most one mail a site in 15 minutes, holding all that is new. What nobody takes in time reaches deputies and admins whatever is set here.',
			pace: {
				at_once: 'at once',
				hourly: 'in an hourly digest',
				daily: 'in a daily digest',
				never: 'not mailed'
			},
			sites: 'Sites',
			allSites: 'All my sites',
			times: 'Times',
			quietFrom: 'Quiet from',
			quietFromHint: 'site late is mailed at any hour',
			quietTo: 'Quiet until',
			quietToHint: 'the same time twice: no quiet hours',
			dailyAt: 'Daily digest at',
			timezone: 'Time zone',
			ofSite: 'that of the site',
			weekends: 'Quiet on Saturdays and Sundays',
			language: 'Language of the mails',
			languageHint: 'the sheets speak it too from the next sign-in on',
			deputy: 'Deputy',
			deputyWho: 'Who is told when I do not take something in time',
			noDeputy: 'nobody: it goes to the admins',
			keep: 'Keep',
			kept: 'Kept. It holds for what comes up from now on.',
			wrongTime: 'A time is written as 07:00.',
			wrongDeputy: 'Choose a deputy from the list.',
			wrongZone: 'This is no time zone.',
			wrongLanguage: 'Choose a language from the list.',
			deputyGone: 'The deputy is not here any more.',
			missing: 'Something is missing.',
			retention:
				'Mails that were sent are kept for 30 days, without their text; closed notices as long as the events of their site.'
		},
		take: {
			name: 'Take a notice',
			heading: 'Take it',
			nothing: 'Nothing was left to take: it is over, or somebody else has it.',
			done: (n: number) =>
				`You have ${many(n, 'notice', 'notices')} now. The others who were told are mailed.`,
			open: 'Open the sheet of notices',
			youTake: (name: string) => `${name}, you take:`,
			failed: 'It was not done.',
			one: 'I take it',
			many: 'I take them',
			instead: 'Open the sheet instead',
			sheetHas: 'The sheet of notices has what is open.',
			openIt: 'Open it',
			over: 'over',
			has: (name: string) => `${name} has it`,
			notOurs: 'This link is not one of ours.',
			expired: 'This link is over: it held for 14 days.',
			nobody: 'The person this was mailed to is not here any more.'
		},
		stop: {
			name: 'Mail of notices',
			heading: 'No more mail of notices',
			notOurs: 'This link is not one of ours, or the person is not here any more.',
			setHere: 'What is mailed to you is set here',
			done: (name: string) =>
				`${name}, no notices are mailed to you any more. On the sheet they stand as before.`,
			again: 'Switch it on again, or choose what is mailed',
			ask: (name: string) =>
				`${name}, nothing of notices is mailed to you from then on, escalations neither.`,
			stop: 'No more mail',
			choose: 'Choose what is mailed'
		}
	},
	{
		mail: {
			heading: 'Aufgefangene Post',
			subject: 'Betreff',
			from: 'Von',
			to: 'An',
			caught: 'Aufgefangen',
			empty: 'Noch keine Post.',
			outside:
				'Post geht an den Server, den SMTP_URL nennt; nur die der Vorführung wird hier aufgefangen.',
			inside: 'Ohne SMTP_URL wird alle Post hier aufgefangen und geht nirgends sonst hin.',
			notSent: (n) => `Nicht versandt, ${n}`,
			aMail: 'eine Mail',
			toWhom: (address) => `, an ${address}`,
			tried: (n, again) => `${n}-mal versucht, wieder ${again}`,
			givenUp: (at, n) => `aufgegeben ${at} nach ${many(n, 'Versuch', 'Versuchen')}`,
			serverSays: (reply) => `; der Postserver sagt: ${reply}`,
			links: 'Mails enthalten Verweise für einmal: wer eine liest, kann sie nutzen.',
			parts: 'Teile der Mail',
			drawn: 'Gezeichnet',
			text: 'Als Text',
			headers: 'Kopfzeilen',
			frame: (subject) => `Die Mail, wie sie gezeichnet ist: ${subject}`,
			noHtml: 'Diese Mail hat keinen gezeichneten Teil.',
			safe: 'Gezeigt ohne Skripte; nichts wird von anderswo geladen.'
		},
		settings: {
			heading: 'Was Ihnen gemailt wird',
			to: (address, role) => `An ${address}; Ihre Rolle: ${role}.`,
			on: 'Mail von Meldungen',
			onHint: 'aus: nichts wird gemailt, auch wenn niemand etwas übernimmt',
			kinds: 'Arten',
			kindsWhy:
				'Höchstens eine Mail je Standort in 15 Minuten, mit allem, was neu ist. Was niemand rechtzeitig übernimmt, erreicht Vertretung und Verwaltung, was immer hier steht.',
			pace: {
				at_once: 'sofort',
				hourly: 'stündlich gesammelt',
				daily: 'täglich gesammelt',
				never: 'keine Mail'
			},
			sites: 'Standorte',
			allSites: 'Alle meine Standorte',
			times: 'Zeiten',
			quietFrom: 'Ruhe ab',
			quietFromHint: 'ein Standort im Verzug wird zu jeder Stunde gemailt',
			quietTo: 'Ruhe bis',
			quietToHint: 'zweimal dieselbe Zeit: keine Ruhezeit',
			dailyAt: 'Täglich gesammelt um',
			timezone: 'Zeitzone',
			ofSite: 'die des Standorts',
			weekends: 'Ruhe an Samstagen und Sonntagen',
			language: 'Sprache der Mails',
			languageHint: 'ab dem nächsten Anmelden auch die der Blätter',
			deputy: 'Vertretung',
			deputyWho: 'Wer es erfährt, wenn ich etwas nicht rechtzeitig übernehme',
			noDeputy: 'niemand: es geht an die Verwaltung',
			keep: 'Behalten',
			kept: 'Behalten. Es gilt für alles, was von jetzt an kommt.',
			wrongTime: 'Eine Zeit wird als 07:00 geschrieben.',
			wrongDeputy: 'Wählen Sie eine Vertretung aus der Liste.',
			wrongZone: 'Das ist keine Zeitzone.',
			wrongLanguage: 'Wählen Sie eine Sprache aus der Liste.',
			deputyGone: 'Die Vertretung ist nicht mehr hier.',
			missing: 'Etwas fehlt.',
			retention:
				'Versandte Mails bleiben 30 Tage verzeichnet, ohne ihren Text; geschlossene Meldungen so lange wie die Ereignisse ihres Standorts.'
		},
		take: {
			name: 'Eine Meldung übernehmen',
			heading: 'Übernehmen',
			nothing: 'Es war nichts mehr zu übernehmen: es ist vorbei, oder jemand anderes hat es.',
			done: (n) =>
				`Sie haben jetzt ${many(n, 'Meldung', 'Meldungen')}. Die anderen bekommen eine Mail.`,
			open: 'Das Blatt der Meldungen öffnen',
			youTake: (name) => `${name}, Sie übernehmen:`,
			failed: 'Es ist nicht geschehen.',
			one: 'Ich übernehme sie',
			many: 'Ich übernehme sie alle',
			instead: 'Stattdessen das Blatt öffnen',
			sheetHas: 'Was offen ist, steht auf dem Blatt der Meldungen.',
			openIt: 'Öffnen',
			over: 'vorbei',
			has: (name) => `${name} hat sie`,
			notOurs: 'Dieser Verweis ist keiner von uns.',
			expired: 'Dieser Verweis ist abgelaufen: er galt 14 Tage.',
			nobody: 'Die Person, an die das ging, ist nicht mehr hier.'
		},
		stop: {
			name: 'Mail von Meldungen',
			heading: 'Keine Mail von Meldungen mehr',
			notOurs: 'Dieser Verweis ist keiner von uns, oder die Person ist nicht mehr hier.',
			setHere: 'Was Ihnen gemailt wird, stellen Sie hier ein',
			done: (name) =>
				`${name}, Ihnen werden keine Meldungen mehr gemailt. Auf dem Blatt stehen sie wie zuvor.`,
			again: 'Wieder einschalten, oder wählen, was gemailt wird',
			ask: (name) =>
				`${name}, von dann an wird Ihnen keine Meldung gemailt, auch wenn niemand etwas übernimmt.`,
			stop: 'Keine Mail mehr',
			choose: 'Wählen, was gemailt wird'
		}
	}
);
