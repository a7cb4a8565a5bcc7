import { area, type Widened } from './index';

/** A person's own desk: sheet, language, keys, what the browser keeps. */
const en = {
	themes: { system: 'as the system', paper: 'paper (day)', blueprint: 'blueprint (night)' },
	theme: 'Sheet',
	themeHint: 'kept in this browser',
	tone: 'Plain tone instead of hatching',
	toneHint: 'for eyes that stripes trouble',
	keys: 'Single-key shortcuts',
	keysHint: 'g and a letter, /, ? ; the list opens with ?',
	without: 'Without a connection',
	keeps: (site: string, time: string) =>
		`This browser keeps the plan of ${site} as of ${time}. It goes when you sign out.`,
	willKeep: 'This browser keeps the last plan that you look at, until you sign out.',
	install: 'Lodekeep can be installed from the browser’s menu; locked after 72 h without contact.',
	noHttps: (host: string) =>
		`This page came over http from ${host}. Installing Lodekeep and opening it without a connection need https there (TLS_CERT and TLS_KEY, or a proxy that ends TLS).`,
	noWorker: 'This browser has no service worker (a private window?).',
	password: 'Change password',
	signOut: 'Sign out'
};
const de: Widened<typeof en> = {
	themes: { system: 'wie das System', paper: 'Papier (Tag)', blueprint: 'Blaupause (Nacht)' },
	theme: 'Blatt',
	themeHint: 'bleibt in diesem Browser',
	tone: 'Ebener Ton statt Schraffur',
	toneHint: 'für Augen, die Streifen stören',
	keys: 'Kürzel mit einer Taste',
	keysHint: 'g und ein Buchstabe, /, ? ; die Liste öffnet sich mit ?',
	without: 'Ohne Verbindung',
	keeps: (site, time) =>
		`Dieser Browser behält den Plan von ${site} mit Stand ${time}. Er geht, wenn Sie sich abmelden.`,
	willKeep: 'Dieser Browser behält den letzten Plan, den Sie ansehen, bis Sie sich abmelden.',
	install:
		'Lodekeep lässt sich aus dem Menü des Browsers einrichten; nach 72 h ohne Kontakt ist es gesperrt.',
	noHttps: (host) =>
		`Diese Seite kam über http von ${host}. Lodekeep einzurichten und ohne Verbindung zu öffnen braucht dort https (TLS_CERT und TLS_KEY oder ein Proxy, bei dem TLS endet).`,
	noWorker: 'Dieser Browser hat keinen Service Worker (ein privates Fenster?).',
	password: 'Passwort ändern',
	signOut: 'Abmelden'
};
export const deskWords = area(en, de);
