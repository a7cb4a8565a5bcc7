import { area, type Widened } from './index';

/** People, their roles and reach. */
const en = {
	title: 'People',
	all: 'all',
	none: 'none',
	off: (date: string) => `switched off ${date}`,
	invited: 'invited, no password yet',
	on: 'on',
	name: 'Name',
	email: 'E-mail',
	role: 'Role',
	sites: 'Sites',
	standing: 'Standing',
	change: 'Change',
	you: 'you',
	demo: 'demo',
	note: (people: string) =>
		`${people}. A change of role or sites ends that person’s sessions at once.`,
	invitePerson: 'Invite a person',
	inviteWhat: 'A mail with a one-time link goes to this address; it holds for 7 days.',
	inviteSent: 'The invitation is on its way.',
	initials: 'Initials',
	initialsHint: '1 to 4 letters, shown on the plan',
	invite: 'Invite',
	inviteAgain: 'Invite again',
	againSent: 'A new invitation is on its way.',
	changed: (name: string) => `${name}: changed.`,
	done: (name: string) => `${name}: done.`,
	switchOff: 'Switch off',
	switchOn: 'Switch on',
	may: {
		operator: 'operator: watches plans, settles, closes, sends for somebody',
		maintenance: 'maintenance: all that, and nodes, film refreshes, visits',
		integrator: 'integrator: keys and webhooks, reads occupancy and telemetry',
		admin: 'admin: everything, and people and sites'
	},
	allSites: 'all sites, those to come included',
	trouble: {
		sites: 'Choose at least one site, or all.',
		email: 'This is no e-mail address.',
		name: 'A name is needed.',
		initials: 'Initials are 1 to 4 letters.',
		missing: 'Something is missing.',
		own: 'Your own access is changed by another admin.',
		here: 'Somebody with this address is here already.',
		takenUp: 'This invitation was taken up already.'
	}
};
const de: Widened<typeof en> = {
	title: 'Personen',
	all: 'alle',
	none: 'keine',
	off: (date) => `abgeschaltet ${date}`,
	invited: 'eingeladen, noch ohne Passwort',
	on: 'aktiv',
	name: 'Name',
	email: 'E-Mail',
	role: 'Rolle',
	sites: 'Standorte',
	standing: 'Stand',
	change: 'Ändern',
	you: 'Sie',
	demo: 'Vorführung',
	note: (people) =>
		`${people}. Ändern sich Rolle oder Standorte, so enden die Sitzungen dieser Person sofort.`,
	invitePerson: 'Jemanden einladen',
	inviteWhat: 'Eine E-Mail mit einem Link für einmal geht an diese Adresse; er gilt 7 Tage.',
	inviteSent: 'Die Einladung ist unterwegs.',
	initials: 'Initialen',
	initialsHint: '1 bis 4 Buchstaben, stehen auf dem Plan',
	invite: 'Einladen',
	inviteAgain: 'Erneut einladen',
	againSent: 'Eine neue Einladung ist unterwegs.',
	changed: (name) => `${name}: geändert.`,
	done: (name) => `${name}: erledigt.`,
	switchOff: 'Abschalten',
	switchOn: 'Einschalten',
	may: {
		operator: 'Betrieb: sieht Pläne, stellt fest, sperrt, ruft jemanden',
		maintenance: 'Instandhaltung: all das, dazu Knoten, Filmauffrischungen, Einsätze',
		integrator: 'Anbindung: Schlüssel und Webhooks, liest Belegung und Telemetrie',
		admin: 'Verwaltung: alles, dazu Personen und Standorte'
	},
	allSites: 'alle Standorte, auch künftige',
	trouble: {
		sites: 'Wählen Sie mindestens einen Standort oder alle.',
		email: 'Das ist keine E-Mail-Adresse.',
		name: 'Es braucht einen Namen.',
		initials: 'Initialen sind 1 bis 4 Buchstaben.',
		missing: 'Es fehlt etwas.',
		own: 'Ihren eigenen Zugang ändert jemand anderes aus der Verwaltung.',
		here: 'Jemand mit dieser Adresse ist schon hier.',
		takenUp: 'Diese Einladung wurde schon angenommen.'
	}
};
export const peopleWords = area(en, de);
