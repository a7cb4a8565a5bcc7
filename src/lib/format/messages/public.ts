import { area, type Widened } from './index';

/** Sheets that anybody may open: invitation, password, sign-out, no connection. */
const en = {
	invitation: 'Invitation',
	welcome: (name: string) => `Welcome, ${name}`,
	choose: (email: string) => `Choose a password for ${email}. You are signed in with it at once.`,
	keep: 'Keep this password',
	usedUp: 'This link is used up or over.',
	askInviter: 'Ask whoever invited you for a new one.',
	signIn: 'Sign in',
	ifPassword: ', if you already have a password.',
	newPassword: 'New password',
	newHeading: 'A new password',
	forHolder: (email: string) => `For ${email}. Every other session of yours ends.`,
	mailed:
		'If somebody has this address here, a mail with a link is on its way. The link works once, for one hour.',
	back: 'Back to signing in',
	askNew: 'Ask for a new one.',
	email: 'E-mail',
	emailHint: 'A one-time link is mailed to it.',
	mailLink: 'Mail a link',
	password: 'Password',
	change: 'Change the password',
	must: 'Your present password was made by the installation. Choose your own first.',
	present: 'Present password',
	changeIt: 'Change it',
	newHint: '12 characters or more; a few words are fine. Pasting works.',
	again: 'The same again',
	signOut: 'Sign out',
	signOutOf: (name: string) => `Sign out, ${name}?`,
	cleared: 'What this browser kept of your sheets is cleared.',
	stay: 'Stay',
	trouble: {
		differ: 'The two passwords differ.',
		missing: 'Something is missing.',
		email: 'This is no e-mail address.',
		signedOut: 'You are signed out.',
		wrong: 'The present password is another one.',
		same: 'The new password is the present one.',
		least: (n: string) => `The password must have at least ${n} characters.`,
		most: (n: string) => `The password must have at most ${n} characters.`,
		different: 'The password must have at least five different characters.',
		own: 'The password must not be your name or address.'
	},
	offline: {
		title: 'No connection',
		oldOf: (site: string) => `Old plan of ${site}`,
		locked: 'What this browser kept is locked.',
		lockedWhy: (ago: string) =>
			`Lodekeep was last reached ${ago}; after 72 h nothing is shown until it answers again.`,
		none: 'This browser keeps no plan.',
		noneWhy: 'The last plan that you looked at is kept here until you sign out.',
		old: 'Old',
		oldAsOf: (time: string) => `Old: as of ${time}`,
		doNotRely: (ago: string) =>
			`No connection. This is the plan as this browser last had it, ${ago}. Bays have changed since: do not rely on it.`,
		again: 'Try again',
		asked: 'Lodekeep is asked every 5 s; the sheet opens by itself when it answers.',
		sheet: 'Plan, old',
		live: 'no connection'
	}
};
const de: Widened<typeof en> = {
	invitation: 'Einladung',
	welcome: (name) => `Willkommen, ${name}`,
	choose: (email) => `Wählen Sie ein Passwort für ${email}. Damit sind Sie sofort angemeldet.`,
	keep: 'Dieses Passwort behalten',
	usedUp: 'Dieser Link ist verbraucht oder vorbei.',
	askInviter: 'Bitten Sie um einen neuen, wo die Einladung herkam.',
	signIn: 'Melden Sie sich an',
	ifPassword: ', wenn Sie schon ein Passwort haben.',
	newPassword: 'Neues Passwort',
	newHeading: 'Ein neues Passwort',
	forHolder: (email) => `Für ${email}. Jede andere Sitzung von Ihnen endet.`,
	mailed:
		'Hat jemand hier diese Adresse, so ist eine E-Mail mit einem Link unterwegs. Der Link gilt einmal, eine Stunde lang.',
	back: 'Zurück zur Anmeldung',
	askNew: 'Bitten Sie um einen neuen.',
	email: 'E-Mail',
	emailHint: 'Ein Link für einmal geht an diese Adresse.',
	mailLink: 'Link senden',
	password: 'Passwort',
	change: 'Passwort ändern',
	must: 'Ihr jetziges Passwort kam von der Einrichtung. Wählen Sie zuerst ein eigenes.',
	present: 'Jetziges Passwort',
	changeIt: 'Ändern',
	newHint: '12 Zeichen oder mehr; einige Wörter sind gut. Einfügen geht.',
	again: 'Noch einmal dasselbe',
	signOut: 'Abmelden',
	signOutOf: (name) => `Abmelden, ${name}?`,
	cleared: 'Was dieser Browser von Ihren Blättern behielt, wird gelöscht.',
	stay: 'Bleiben',
	trouble: {
		differ: 'Die beiden Passwörter sind verschieden.',
		missing: 'Es fehlt etwas.',
		email: 'Das ist keine E-Mail-Adresse.',
		signedOut: 'Sie sind abgemeldet.',
		wrong: 'Das jetzige Passwort ist ein anderes.',
		same: 'Das neue Passwort ist das jetzige.',
		least: (n) => `Das Passwort braucht mindestens ${n} Zeichen.`,
		most: (n) => `Das Passwort darf höchstens ${n} Zeichen haben.`,
		different: 'Das Passwort braucht mindestens fünf verschiedene Zeichen.',
		own: 'Das Passwort darf nicht Ihr Name oder Ihre Adresse sein.'
	},
	offline: {
		title: 'Keine Verbindung',
		oldOf: (site) => `Alter Plan von ${site}`,
		locked: 'Was dieser Browser behielt, ist gesperrt.',
		lockedWhy: (ago) =>
			`Lodekeep war zuletzt ${ago} erreichbar; nach 72 h wird nichts gezeigt, bis es wieder antwortet.`,
		none: 'Dieser Browser behält keinen Plan.',
		noneWhy: 'Der letzte Plan, den Sie ansahen, bleibt hier, bis Sie sich abmelden.',
		old: 'Alt',
		oldAsOf: (time) => `Alt: Stand ${time}`,
		doNotRely: (ago) =>
			`Keine Verbindung. Das ist der Plan, wie ihn dieser Browser zuletzt hatte, ${ago}. Seitdem haben sich Stellplätze geändert: Verlassen Sie sich nicht darauf.`,
		again: 'Erneut versuchen',
		asked: 'Lodekeep wird alle 5 s gefragt; das Blatt öffnet sich von selbst, sobald es antwortet.',
		sheet: 'Plan, alt',
		live: 'keine Verbindung'
	}
};
export const publicWords = area(en, de);
