import { area, type Widened } from './index';

/** The sheet that stands where another could not be drawn, and why. */
const en = {
	role: 'This sheet is not for your role.',
	none: 'There is no such sheet.',
	database: 'The database is away.',
	other: 'This sheet could not be drawn.',
	number: (status: number) => `Lodekeep, sheet ${status}`,
	reference: (code: string) => `Reference for whoever reads the log: ${code}`,
	first: 'To the first sheet',
	reload: 'Reload',
	signIn: 'Sign in first.',
	askAdmin: 'Ask an admin if you need it.',
	password: 'Change your password first.',
	noSite: 'This site is not there, or not among your sites.',
	noBay: (code: string) => `There is no bay ${code} here, or not among your sites.`,
	noWalk: 'There is no such walk.',
	noMail: 'There is no such mail.',
	noWall: 'This wall link is not known, or it was revoked, or its time is over.',
	attempts: 'Too many attempts. Try again in a minute.',
	language: 'language: must be en or de.',
	broke: 'Something broke here.'
};
const de: Widened<typeof en> = {
	role: 'Dieses Blatt ist nicht für Ihre Rolle.',
	none: 'Dieses Blatt gibt es nicht.',
	database: 'Die Datenbank ist nicht da.',
	other: 'Dieses Blatt ließ sich nicht zeichnen.',
	number: (status) => `Lodekeep, Blatt ${status}`,
	reference: (code) => `Kennung für das Protokoll: ${code}`,
	first: 'Zum ersten Blatt',
	reload: 'Neu laden',
	signIn: 'Melden Sie sich zuerst an.',
	askAdmin: 'Fragen Sie die Verwaltung, wenn Sie es brauchen.',
	password: 'Ändern Sie zuerst Ihr Passwort.',
	noSite: 'Diesen Standort gibt es nicht, oder er gehört nicht zu Ihren.',
	noBay: (code) =>
		`Einen Stellplatz ${code} gibt es hier nicht, oder er gehört nicht zu Ihren Standorten.`,
	noWalk: 'Diesen Gang gibt es nicht.',
	noMail: 'Diese Post gibt es nicht.',
	noWall: 'Diesen Wandlink gibt es nicht, oder er wurde widerrufen, oder seine Zeit ist vorbei.',
	attempts: 'Zu viele Versuche. Versuchen Sie es in einer Minute wieder.',
	language: 'language: muss en oder de sein.',
	broke: 'Hier ist etwas kaputtgegangen.'
};
export const errorWords = area(en, de);
