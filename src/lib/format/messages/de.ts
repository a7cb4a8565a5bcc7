import type { Messages } from './index';

/** German, the second language: proves that nothing visible of the shell stands outside these tables. */
export const de: Messages = {
	locale: 'de-DE',
	state: { occupied: 'belegt', vacant: 'frei', unknown: 'nicht bekannt' },
	condition: {
		withdrawn: 'ausgebaut',
		unplaced: 'ohne Knoten',
		learning: 'lernt',
		silent: 'stumm',
		inverted: 'umgekehrt',
		clipped: 'übersteuert',
		refresh_due: 'Filmauffrischung fällig',
		drifting: 'driftet',
		in_service: 'in Betrieb'
	},
	conditionSentence: {
		withdrawn: 'außer Betrieb genommen',
		unplaced: 'hier ist kein Knoten eingesetzt',
		learning: 'sucht sein Ruhefeld',
		silent: 'nicht gehört',
		inverted: 'Film umgeklappt; der Zustand stimmt',
		clipped: 'ein Magnet oder Stahl übersteuert ihn; bis dahin nicht bekannt',
		refresh_due: 'der Film braucht einen Puls',
		drifting: 'das Ruhefeld wandert; die Zustände stimmen noch',
		in_service: 'gehört und glaubhaft'
	},
	silentSince: (time) => `nicht gehört seit ${time}`,
	mark: {
		clock_off: 'Uhr geht falsch: Zeiten auf die Ankunft verschoben',
		unsigned: 'Nachrichten ohne Signatur erlaubt',
		low_cell: 'Zelle schwach',
		fast_reporting: 'meldet häufig',
		provisional: 'Bezug vorläufig'
	},
	confidence: { sure: 'sicher', fairlySure: 'ziemlich sicher', unsure: 'unsicher' },
	event: {
		arrival: 'ein Fahrzeug kam',
		departure: 'das Fahrzeug fuhr ab',
		unknown: 'nicht mehr bekannt',
		known: 'wieder glaubhaft',
		settled: 'von einer Person festgestellt',
		voided: 'ein früheres Ereignis zurückgenommen'
	},
	role: {
		operator: 'Betrieb',
		maintenance: 'Instandhaltung',
		integrator: 'Anbindung',
		admin: 'Verwaltung'
	},
	doubt: {
		slow_crossing: 'langsame Überfahrt',
		magnet: 'Magnet',
		'after works': 'nach Arbeiten',
		'told free, not seen': 'frei gesagt, nicht gesehen',
		'field moved during a gap': 'das Feld wanderte während einer Lücke',
		'reference may hold a vehicle': 'der Bezug kann ein Fahrzeug enthalten',
		'long stay, field no longer as after the arrival':
			'lange belegt, Feld nicht mehr wie nach der Ankunft',
		'the field jumped at a pulse without before and after':
			'das Feld sprang bei einem Puls ohne Vorher und Nachher'
	},
	noun: {
		bay: ['Stellplatz', 'Stellplätze'],
		site: ['Standort', 'Standorte'],
		vehicle: ['Fahrzeug', 'Fahrzeuge'],
		doubt: ['Zweifel', 'Zweifel'],
		node: ['Knoten', 'Knoten']
	},
	duration: {
		second: 's',
		minute: 'min',
		hour: 'h',
		day: 'd',
		ago: (length) => `vor ${length}`,
		justNow: 'gerade eben',
		never: 'nie'
	},
	notMeasured: 'nicht gemessen',
	live: {
		signedOut: 'abgemeldet: die Anzeige steht still',
		noAnswer: (time, length) => `keine Antwort von Lodekeep seit ${time} (${length})`,
		asking: 'wird gefragt …',
		live: (heard) => `aktuell, ${heard}`,
		late: (time, length, heard) => `verspätet seit ${time} (${length}), ${heard}`,
		lost: (time, length, heard) => `verloren seit ${time} (${length}), ${heard}`,
		heard: (heard, expected) => `${heard} von ${expected} Knoten gehört`
	},
	sheet: {
		Sites: 'Standorte',
		Plan: 'Plan',
		Nodes: 'Knoten',
		Closures: 'Sperrungen',
		'Sent for': 'Gerufen',
		Drift: 'Drift',
		Connections: 'Anbindungen',
		People: 'Personen',
		Mail: 'Post',
		'Wall links': 'Wandlinks',
		'My desk': 'Mein Platz',
		'Sites register': 'Verzeichnis der Standorte'
	},
	frame: {
		skip: 'Zum Blatt springen',
		sheets: 'Blätter',
		main: 'Hauptleiste',
		corner: 'Notizen und Schriftfeld',
		find: 'Suchen',
		index: 'Blätter',
		indexOfSheets: 'Verzeichnis der Blätter',
		myDesk: 'Mein Platz',
		sheetNumbers: 'Blattnummern',
		keys: 'Tasten',
		keysRest: 'Einzelne Tasten ruhen in Feldern und auf dem Plan.',
		then: 'dann',
		thisList: 'diese Liste',
		onThePlan: 'Auf dem Plan',
		singleKeys: 'Kürzel mit einer Taste'
	},
	titleBlock: {
		name: 'Schriftfeld',
		site: 'Standort',
		sheet: 'Blatt',
		shows: 'Zeigt',
		asOf: 'Stand',
		notYet: 'noch nicht',
		allSites: 'Alle Standorte',
		nobody: 'niemand angemeldet',
		demo: 'Vorführung: simuliert'
	},
	signIn: {
		title: 'Anmelden',
		left: 'Sie sind abgemeldet. Hier bleibt nichts von Ihnen zurück.',
		email: 'E-Mail',
		password: 'Passwort',
		forgotten: 'Passwort vergessen',
		over: 'Sie sind abgemeldet',
		overWhy: (person) =>
			`${person}, Ihre Sitzung ist zu Ende. Melden Sie sich hier an; Eingegebenes bleibt stehen.`,
		failed: 'Das ging nicht.',
		noAnswer: 'Lodekeep antwortet nicht.',
		emailMissing: 'Die E-Mail-Adresse fehlt.',
		passwordMissing: 'Das Passwort fehlt.',
		wrong: 'Diese Adresse und dieses Passwort gehören nicht zusammen.',
		throttled: (length) => `Zu viele Versuche. Versuchen Sie es in ${length} wieder.`
	},
	planKeys: {
		arrows: 'nächster Stellplatz in der Richtung',
		ends: 'entlang der Reihe',
		pages: 'nach Zonen',
		needs: 'Stellplätze, die jemanden brauchen',
		letters: 'zu einem Kürzel',
		space: 'wählen',
		enter: 'Akte öffnen',
		escape: 'zurück',
		zoom: 'näher, ferner, ganzer Standort'
	},
	planKeyNames: {
		arrows: 'Pfeile',
		ends: 'Pos1, Ende',
		pages: 'Bildtasten',
		needs: ', und .',
		letters: 'Buchstaben, Ziffern',
		space: 'Leertaste',
		enter: 'Eingabe',
		escape: 'Escape',
		zoom: '+ − 0'
	},
	plan: {
		of: (site) => `Plan von ${site}`,
		ofBays: (site, bays) => `Plan von ${site}, ${bays}`,
		tableOf: (site) => `${site}, Tabelle der Stellplätze`,
		spokenKeys:
			'Pfeiltasten gehen zum nächsten Stellplatz, Pos1 und Ende entlang der Reihe, Bildtasten nach Zonen, Punkt und Komma zu den Stellplätzen, die jemanden brauchen, Buchstaben und Ziffern zu einem Kürzel, die Leertaste wählt, Eingabe öffnet, Escape geht zurück, Plus, Minus und 0 ändern die Größe.',
		row: (number) => `Reihe ${number}`,
		ofRow: (at, of) => `${at} von ${of}`,
		was: (state, time) => `war ${state} ${time}`,
		since: (state, time, length) => `${state} seit ${time} (${length})`,
		closedUntil: (time, reason) => `gesperrt bis ${time}: ${reason}`,
		closed: 'gesperrt',
		withdrawn: 'ausgebaut',
		doubtful: 'zweifelhaft',
		doubtfulFor: (reason) => `zweifelhaft: ${reason}`,
		needsPerson: 'braucht jemanden',
		inHand: 'in Arbeit',
		legend: 'Legende',
		zone: 'Zone',
		all: 'alle',
		show: 'Zeigen',
		everything: 'alles',
		shownOf: (shown, total) => `${shown} von ${total}`,
		size: 'Größe',
		farther: '− Ferner',
		nearer: '+ Näher',
		whole: 'Ganzer Standort',
		hatching: 'Schraffur',
		plainTone: 'Ebener Ton',
		drawing: 'Zeichnung',
		table: 'Tabelle',
		closeBays: 'Stellplätze sperren',
		nearMe: 'Die nächsten',
		needTitle: 'Braucht jemanden',
		needNothing: 'nichts; jeder Stellplatz ist glaubhaft oder in Arbeit',
		sentFor: (reason) => `gerufen: ${reason}`,
		has: (initials) => `${initials} hat es`,
		more: (n) => `und ${n} weitere`,
		count: 'Anzahl',
		sum: (taken, free, unknown) => `${taken} belegt, ${free} frei, ${unknown} nicht bekannt`,
		asking: 'die Stellplätze werden gefragt …',
		changed: (sum) => `In der letzten halben Minute: ${sum}.`,
		sinceTitle: (time) => `Seit Sie zuletzt hier waren, ${time}`,
		sinceName: 'Seit Sie zuletzt hier waren',
		came: (vehicles, left) => `${vehicles} kamen, ${left} fuhren ab`,
		becameDoubtful: (reason) => `wurde zweifelhaft: ${reason}`,
		moreDoubtful: (n) => `und ${n} weitere zweifelhaft`,
		noLongerKnown: (bays, codes) => `${bays} nicht mehr bekannt: ${codes}`,
		noDoubt: 'kein neuer Zweifel',
		noBay: 'Dieser Standort hat noch keinen Stellplatz.',
		noBayCure: 'Stellplätze kommen über die API hinzu, als GeoJSON.',
		gone: (code) => `Einen Stellplatz ${code} gibt es hier nicht (mehr).`,
		keyPlan: 'Übersicht: der gezeigte Teil des Standorts',
		onScreen: (scale) => `${scale} am Bildschirm`
	},
	near: {
		title: 'Die nächsten',
		asking: 'das Gerät wird gefragt, wo es ist …',
		refused:
			'Dieses Gerät sagt nicht, wo es ist. Erlauben Sie dieser Seite den Standort, dann fragen Sie wieder.',
		insecure: 'Eine Seite über http darf nicht fragen, wo das Gerät ist; dafür braucht es https.',
		away: (length) =>
			`Bis zum nächsten Stellplatz sind es ${length}: weiter, als ein Standort breit ist.`,
		within: (length) => `auf ${length} genau`,
		close: 'Weglegen'
	},
	note: {
		putAway: 'Weglegen',
		closed: 'Gesperrt',
		until: 'bis',
		reason: 'Grund',
		before: 'zuvor',
		howSure: 'wie sicher',
		heard: 'gehört',
		because: 'dafür',
		against: 'dagegen',
		doubt: 'Zweifel',
		doNotRely: (reason, time) =>
			`verlassen Sie sich nicht auf diesen Stellplatz: ${reason}, seit ${time}`,
		node: 'Knoten',
		none: 'keiner',
		nobodyHasIt: 'braucht jemanden, niemand hat es',
		hasIt: (name, initials) => `${name} (${initials}) hat es`,
		since: 'seit'
	},
	table: {
		bay: 'Platz',
		state: 'Zustand',
		since: 'Seit',
		for: 'Dauer',
		need: 'Bedarf',
		condition: 'Befund',
		node: 'Knoten'
	},
	desk: {
		language: 'Sprache',
		languageHint: 'der Blätter; Daten und Namen bleiben, wie sie sind',
		speak: 'Diese Sprache verwenden'
	}
};
