import { area, type Widened } from './index';

/** Words of visits: the sheets 'Visits', a walk, and what waits in the browser. */
const en = {
	sheet: 'Visits',
	walkSheet: 'Walk',
	headingAll: 'Visits of all sites',
	heading: (site: string) => `Visits at ${site}`,
	walkHeading: (site: string, id: number) => `Walk ${id} at ${site}`,
	caution: {
		road: 'Work in or beside a carriageway follows the local traffic-management code and is done by people licensed for it. Buried services are checked and recorded before coring.',
		lithium:
			"Lithium cells: follow the maker's handling rules. Never charge, short, crush or heat them; the transport and disposal rules in force hold for old ones too.",
		magnet:
			'A strong magnet disturbs films, pacemakers and cards: it is no test tool. Take a new reference only with the bay seen empty.',
		photos: 'Keep plates and faces out of photos. Position data is stripped.',
		stand: 'Stand still to read the phone; look from the footway.'
	},
	cause: {
		not_cured: 'film refresh did not cure it',
		silent: 'silent',
		clipped: 'clipped: a magnet or steel',
		low_cell: 'low cell',
		swap: 'node is to be swapped',
		by_hand: 'asked for'
	},
	causeOver: 'over by itself',
	check: {
		area_secured: 'Work area secured, warning clothing on',
		node_found: 'Node found, bay code compared',
		cover_sound: 'Cover and seat sound, no water inside',
		nothing_over_it: 'Nothing of metal parked or lying over it',
		steel_looked_for: 'Looked for steel and magnets within 2 m (drain covers, trailers, signs)',
		steel_taken_away: 'Taken away, or noted why not',
		cell_measured: 'Voltage of the cell measured under load, noted',
		cell_changed: 'New cell in, polarity compared first',
		seal_clean: 'Seal clean, greased, closed',
		old_cell_packed: 'Old cell insulated at its poles and packed',
		serials_read: 'Serials of the old and the new node read and noted',
		services_checked: 'Buried services checked and recorded before coring',
		sits_level: 'Node sits level and firm',
		bay_seen_empty: 'Bay seen empty for the new quiet field',
		heard_again: 'Node heard again before leaving',
		as_asked: 'Done as asked for'
	},
	part: {
		cell: 'cells',
		node: 'nodes',
		seal: 'seals',
		cover: 'covers',
		screws: 'sets of screws'
	},
	tool: {
		warning_gear: 'warning clothing, cones, what the permit asks for',
		cover_key: 'cover key and lever (not of steel near the node)',
		torch_brush: 'torch, brush, cloth',
		voltmeter: 'voltmeter with a load resistor',
		seal_grease: 'seal grease',
		cell_bags: 'bags and tape for old cells',
		compass: 'pocket compass to find steel',
		level: 'spirit level',
		services_plan: 'plan of buried services, with the record sheet'
	},
	outcome: {
		cured: 'cured on the spot',
		cell_changed: 'cell changed',
		node_swapped: 'node swapped',
		obstacle_removed: 'magnet or steel taken away',
		to_be_swapped: 'node is to be swapped',
		nothing_found: 'nothing found',
		not_reached: 'not reached',
		other: 'something else'
	},
	outcomeNext: {
		cured: 'ends the request; its notices are settled',
		cell_changed: 'ends the request; its notices are settled',
		node_swapped: 'ends the request; its notices are settled',
		obstacle_removed: 'ends the request; its notices are settled',
		to_be_swapped: 'the bay stays on the list, with a spare node to load',
		nothing_found: 'ends the request; its notices are settled',
		not_reached: 'the bay goes back to the list',
		other: 'ends the request; its notices are settled'
	},
	list: {
		title: 'What needs a visit',
		pick: (bay: string) => `Take ${bay} along`,
		all: (n: number) => `all ${n} that nobody has`,
		take: (n: number) => (n === 1 ? 'Take 1 bay into my walk' : `Take ${n} bays into my walk`),
		takeNone: 'Take bays into my walk',
		taken: (n: number, left: number) =>
			`${n} taken into your walk${left === 0 ? '' : `; ${left} had somebody else by now`}.`,
		nobody: 'nobody yet',
		you: 'you',
		waits: (length: string) => `waits ${length}`,
		zone: (zone: string) => `zone ${zone}`,
		empty: 'No bay needs a visit.',
		emptyWhy:
			'Bays come here by themselves: silent or overloaded for a day, a low cell, a film refresh that did not cure. From the plan or a dossier: ‘Send someone’.',
		emptyAll: 'No site needs a visit.',
		allSites: 'Visits of all sites',
		openSite: (site: string) => `Visits at ${site}`,
		toCount: (n: number) => (n === 1 ? '1 bay needs somebody' : `${n} bays need somebody`),
		rule: 'By rule: silent for 24 h, clipped for 24 h, low cell at once, a film refresh not cured for 48 h or twice.',
		onlyFitters: 'Walks are taken by maintenance. You can ask for somebody from the plan.'
	},
	walks: {
		open: 'Walks under way',
		ended: 'Walks of late',
		none: 'Nobody is walking now.',
		yours: 'yours',
		colleague: 'a colleague',
		stops: (done: number, all: number) => `${done} of ${all} stops done`,
		open_: (id: number) => `Open walk ${id}`,
		number: (id: number) => `Walk ${id}`
	},
	access: {
		title: 'How to get in',
		parking: 'Parking',
		wayIn: 'Way in',
		keysAt: 'Keys',
		contact: 'Contact',
		permits: 'Permits',
		none: 'Nobody has written how to get in here.',
		edit: 'Change',
		editTitle: (site: string) => `How to get in at ${site}`,
		editHint:
			'Keys and contact are shown to maintenance and admins only. No door codes: say who has them.',
		permitName: 'Permit',
		permitNumber: 'Number',
		permitDay: 'Good up to and including',
		addPermit: 'Add a permit',
		dropPermit: (n: number) => `Take out permit ${n}`,
		goodUntil: (day: string) => `good until ${day}`,
		noEnd: 'without an end',
		over: (day: string) => `ended on ${day}: do not work on it`,
		soon: (days: number, day: string) =>
			days === 0 ? `ends today, ${day}` : `ends in ${days} d, on ${day}`,
		save: 'Keep it',
		saved: 'Kept.',
		changed: (time: string) => `last changed ${time}`
	},
	load: {
		title: 'What to load',
		cells: (n: number) => (n === 1 ? '1 cell' : `${n} cells`),
		seals: (n: number) => (n === 1 ? '1 seal' : `${n} seals`),
		spares: (n: number, profile: string) =>
			`${n === 1 ? '1 spare node' : `${n} spare nodes`} with profile ${profile}`,
		done: 'Every stop is done: nothing to load.'
	},
	walk: {
		plan: 'Stops in order',
		planAlt: (n: number, length: string) =>
			`Plan with ${n} numbered stops, a walk of ${length} as the crow flies.`,
		lengthM: (m: number) => `${m} m as the crow flies`,
		undrawn: 'Bays that are not drawn come last.',
		stop: (place: number, bay: string) => `Stop ${place}: ${bay}`,
		dossier: 'Dossier',
		checks: 'Checks',
		parts: 'Parts used',
		partMore: (part: string) => `One more: ${part}`,
		partLess: (part: string) => `One fewer: ${part}`,
		notes: 'Notes',
		noteLabel: 'A note',
		addNote: 'Keep the note',
		photos: 'Photos',
		addPhoto: 'Take a photo',
		dropPhoto: 'Take it back',
		dropPhotoSure: 'Take this photo back? It is deleted for everybody.',
		photoAlt: (time: string) => `Photo of ${time}`,
		photoWaits: 'photo, waits to be sent',
		photoOnline: 'Photos that were sent are shown with a connection.',
		outcome: 'What came of it',
		outcomeLabel: 'Outcome',
		choose: 'choose …',
		outcomeNote: 'In words',
		outcomeNeedsWords: 'Say in words what it was.',
		close: 'Close this stop',
		closeSure: (bay: string) => `Close ${bay}?`,
		closed: (word: string) => `Closed: ${word}`,
		waitsClosed: (word: string) => `Closed here, waits to be sent: ${word}`,
		additions: 'Came after it was closed',
		added: 'kept as an addition: somebody else had closed the stop',
		timeline: (id: string, outcome: string) => `visit ${id}: ${outcome}`,
		end: 'End the walk',
		endSure: (n: number) =>
			n === 0
				? 'All stops are done.'
				: `${n === 1 ? '1 stop is' : `${n} stops are`} not done and ${n === 1 ? 'goes' : 'go'} back to the list.`,
		ended: 'This walk is over.',
		over: (time: string) => `over since ${time}`,
		print: 'Print the walk',
		back: 'Leave it',
		by: (name: string) => `by ${name}`,
		notYours: (name: string) =>
			`${name} walks this. You can record too; each is kept under who did it.`,
		offline: 'No connection. What you record is kept in this browser and sent later.',
		again: 'Lodekeep answers again.',
		reopen: 'Open the sheet',
		toPlan: 'The old plan',
		asOf: (time: string) => `as of ${time}`,
		old: (age: string) =>
			`As this browser last had it, ${age} ago. Others may have closed stops since.`,
		unsure: 'A recording of this stop was refused: see ‘What waits’ above.'
	},
	waiting: {
		title: 'What waits to be sent',
		noAnswer: 'no connection',
		none: 'Everything recorded here has been sent.',
		count: (n: number) =>
			n === 1 ? '1 recording waits to be sent' : `${n} recordings wait to be sent`,
		others: (n: number) =>
			`${n === 1 ? '1 recording' : `${n} recordings`} of another person ${n === 1 ? 'waits' : 'wait'} in this browser. ${n === 1 ? 'It is' : 'They are'} sealed, and sent when that person signs in here.`,
		state: {
			waiting: 'waits for a connection',
			sending: 'is being sent',
			held: 'waits for you to sign in',
			refused: 'was refused',
			unreadable: 'cannot be opened'
		},
		sealed: 'Sealed: sign in as the person who recorded it.',
		sendNow: 'Send now',
		again: 'Send again',
		discard: 'Discard',
		discardSure: 'Discard this recording? It was never sent and cannot be brought back.',
		what: {
			tick: (check: string) => `check ‘${check}’`,
			part: (n: number, part: string) => `parts: ${n} ${part}`,
			note: 'a note',
			outcome: (word: string) => `outcome ‘${word}’`,
			photo: 'a photo'
		},
		at: (what: string, bay: string, time: string) => `${bay}, ${time}: ${what}`,
		cannot: 'This browser cannot keep recordings without a connection here: it needs https.',
		noKey: 'Open this walk once with a connection, then recording without one works.',
		full: 'This browser has no room left. Send what waits first.',
		unreadableCure:
			'It was sealed before the secret of this installation was changed twice. It can only be discarded.',
		added: (n: number) =>
			`${n === 1 ? '1 recording was' : `${n} recordings were`} kept as an addition: somebody else had closed the stop.`
	}
};

const de: Widened<typeof en> = {
	sheet: 'Einsätze',
	walkSheet: 'Rundgang',
	headingAll: 'Einsätze an allen Standorten',
	heading: (site) => `Einsätze: ${site}`,
	walkHeading: (site, id) => `Rundgang ${id}: ${site}`,
	caution: {
		road: 'Arbeiten in oder neben der Fahrbahn folgen der örtlichen Verkehrssicherung und sind Sache von Leuten, die dafür zugelassen sind. Leitungen im Boden werden vor dem Bohren geprüft und festgehalten.',
		lithium:
			'Lithiumzellen: die Regeln des Herstellers gelten. Nie laden, kurzschließen, quetschen oder erhitzen; die Vorschriften für Transport und Entsorgung gelten auch für alte Zellen.',
		magnet:
			'Ein starker Magnet stört Filme, Herzschrittmacher und Karten: Er ist kein Prüfmittel. Ein neuer Bezug nur, wenn der Platz leer gesehen wurde.',
		photos: 'Kennzeichen und Gesichter nicht aufnehmen. Ortsangaben werden entfernt.',
		stand: 'Zum Lesen stehen bleiben; vom Gehweg aus schauen.'
	},
	cause: {
		not_cured: 'Filmauffrischung half nicht',
		silent: 'stumm',
		clipped: 'übersteuert: Magnet oder Stahl',
		low_cell: 'Zelle schwach',
		swap: 'Knoten ist zu tauschen',
		by_hand: 'angefordert'
	},
	causeOver: 'von selbst vorbei',
	check: {
		area_secured: 'Arbeitsstelle gesichert, Warnkleidung an',
		node_found: 'Knoten gefunden, Platznummer verglichen',
		cover_sound: 'Deckel und Sitz heil, kein Wasser darin',
		nothing_over_it: 'Nichts aus Metall steht oder liegt darüber',
		steel_looked_for:
			'Stahl und Magnete im Umkreis von 2 m gesucht (Schachtdeckel, Anhänger, Schilder)',
		steel_taken_away: 'Entfernt, oder notiert, warum nicht',
		cell_measured: 'Spannung der Zelle unter Last gemessen, notiert',
		cell_changed: 'Neue Zelle eingesetzt, Polung vorher verglichen',
		seal_clean: 'Dichtung sauber, gefettet, geschlossen',
		old_cell_packed: 'Alte Zelle an den Polen isoliert und verpackt',
		serials_read: 'Seriennummern des alten und des neuen Knotens gelesen und notiert',
		services_checked: 'Leitungen im Boden vor dem Bohren geprüft und festgehalten',
		sits_level: 'Knoten sitzt waagrecht und fest',
		bay_seen_empty: 'Platz für das neue Ruhefeld leer gesehen',
		heard_again: 'Knoten vor dem Weggehen wieder gehört',
		as_asked: 'Erledigt wie angefordert'
	},
	part: {
		cell: 'Zellen',
		node: 'Knoten',
		seal: 'Dichtungen',
		cover: 'Deckel',
		screws: 'Sätze Schrauben'
	},
	tool: {
		warning_gear: 'Warnkleidung, Leitkegel, was die Genehmigung verlangt',
		cover_key: 'Deckelschlüssel und Heber (nicht aus Stahl nahe am Knoten)',
		torch_brush: 'Lampe, Bürste, Tuch',
		voltmeter: 'Spannungsmesser mit Lastwiderstand',
		seal_grease: 'Dichtungsfett',
		cell_bags: 'Beutel und Band für alte Zellen',
		compass: 'Taschenkompass, um Stahl zu finden',
		level: 'Wasserwaage',
		services_plan: 'Plan der Leitungen im Boden, mit dem Prüfblatt'
	},
	outcome: {
		cured: 'vor Ort behoben',
		cell_changed: 'Zelle gewechselt',
		node_swapped: 'Knoten getauscht',
		obstacle_removed: 'Magnet oder Stahl entfernt',
		to_be_swapped: 'Knoten ist zu tauschen',
		nothing_found: 'nichts gefunden',
		not_reached: 'nicht erreicht',
		other: 'etwas anderes'
	},
	outcomeNext: {
		cured: 'beendet die Anforderung; ihre Meldungen sind erledigt',
		cell_changed: 'beendet die Anforderung; ihre Meldungen sind erledigt',
		node_swapped: 'beendet die Anforderung; ihre Meldungen sind erledigt',
		obstacle_removed: 'beendet die Anforderung; ihre Meldungen sind erledigt',
		to_be_swapped: 'der Platz bleibt auf der Liste, mit einem Ersatzknoten zum Einladen',
		nothing_found: 'beendet die Anforderung; ihre Meldungen sind erledigt',
		not_reached: 'der Platz geht zurück auf die Liste',
		other: 'beendet die Anforderung; ihre Meldungen sind erledigt'
	},
	list: {
		title: 'Was einen Einsatz braucht',
		pick: (bay) => `${bay} mitnehmen`,
		all: (n) => `alle ${n}, die niemand hat`,
		take: (n) =>
			n === 1 ? '1 Platz in meinen Rundgang nehmen' : `${n} Plätze in meinen Rundgang nehmen`,
		takeNone: 'Plätze in meinen Rundgang nehmen',
		taken: (n, left) =>
			`${n} in Ihren Rundgang genommen${left === 0 ? '' : `; ${left} hatte inzwischen jemand anderes`}.`,
		nobody: 'noch niemand',
		you: 'Sie',
		waits: (length) => `wartet ${length}`,
		zone: (zone) => `Zone ${zone}`,
		empty: 'Kein Platz braucht einen Einsatz.',
		emptyWhy:
			'Plätze kommen von selbst hierher: einen Tag stumm oder übersteuert, schwache Zelle, eine Filmauffrischung, die nicht half. Vom Plan oder aus einer Akte: ‚Jemanden rufen‘.',
		emptyAll: 'Kein Standort braucht einen Einsatz.',
		allSites: 'Einsätze an allen Standorten',
		openSite: (site) => `Einsätze: ${site}`,
		toCount: (n) => (n === 1 ? '1 Platz braucht jemanden' : `${n} Plätze brauchen jemanden`),
		rule: 'Nach Regel: 24 h stumm, 24 h übersteuert, schwache Zelle sofort, eine Filmauffrischung 48 h oder zweimal ohne Erfolg.',
		onlyFitters: 'Rundgänge übernimmt die Instandhaltung. Anfordern können Sie vom Plan aus.'
	},
	walks: {
		open: 'Laufende Rundgänge',
		ended: 'Letzte Rundgänge',
		none: 'Zurzeit ist niemand unterwegs.',
		yours: 'Ihrer',
		colleague: 'jemand aus dem Team',
		stops: (done, all) => `${done} von ${all} Stationen erledigt`,
		open_: (id) => `Rundgang ${id} öffnen`,
		number: (id) => `Rundgang ${id}`
	},
	access: {
		title: 'Zugang',
		parking: 'Parken',
		wayIn: 'Weg hinein',
		keysAt: 'Schlüssel',
		contact: 'Ansprechperson',
		permits: 'Genehmigungen',
		none: 'Noch hat niemand den Zugang beschrieben.',
		edit: 'Ändern',
		editTitle: (site) => `Zugang: ${site}`,
		editHint:
			'Schlüssel und Ansprechperson sehen nur Instandhaltung und Verwaltung. Keine Türcodes: schreiben Sie, wer sie hat.',
		permitName: 'Genehmigung',
		permitNumber: 'Nummer',
		permitDay: 'Gültig bis einschließlich',
		addPermit: 'Genehmigung hinzufügen',
		dropPermit: (n) => `Genehmigung ${n} herausnehmen`,
		goodUntil: (day) => `gültig bis ${day}`,
		noEnd: 'ohne Ende',
		over: (day) => `am ${day} abgelaufen: nicht mehr damit arbeiten`,
		soon: (days, day) => (days === 0 ? `endet heute, ${day}` : `endet in ${days} d, am ${day}`),
		save: 'Festhalten',
		saved: 'Festgehalten.',
		changed: (time) => `zuletzt geändert ${time}`
	},
	load: {
		title: 'Was einzuladen ist',
		cells: (n) => (n === 1 ? '1 Zelle' : `${n} Zellen`),
		seals: (n) => (n === 1 ? '1 Dichtung' : `${n} Dichtungen`),
		spares: (n, profile) => `${n} Ersatzknoten mit Profil ${profile}`,
		done: 'Alle Stationen sind erledigt: nichts einzuladen.'
	},
	walk: {
		plan: 'Stationen der Reihe nach',
		planAlt: (n, length) =>
			`Plan mit ${n} nummerierten Stationen, ein Weg von ${length} Luftlinie.`,
		lengthM: (m) => `${m} m Luftlinie`,
		undrawn: 'Nicht gezeichnete Plätze kommen zuletzt.',
		stop: (place, bay) => `Station ${place}: ${bay}`,
		dossier: 'Akte',
		checks: 'Prüfpunkte',
		parts: 'Verbrauchte Teile',
		partMore: (part) => `Eins mehr: ${part}`,
		partLess: (part) => `Eins weniger: ${part}`,
		notes: 'Notizen',
		noteLabel: 'Eine Notiz',
		addNote: 'Notiz festhalten',
		photos: 'Fotos',
		addPhoto: 'Foto aufnehmen',
		dropPhoto: 'Zurücknehmen',
		dropPhotoSure: 'Dieses Foto zurücknehmen? Es wird für alle gelöscht.',
		photoAlt: (time) => `Foto von ${time}`,
		photoWaits: 'Foto, wartet auf das Senden',
		photoOnline: 'Gesendete Fotos sind mit Verbindung zu sehen.',
		outcome: 'Was dabei herauskam',
		outcomeLabel: 'Ergebnis',
		choose: 'wählen …',
		outcomeNote: 'In Worten',
		outcomeNeedsWords: 'Schreiben Sie in Worten, was es war.',
		close: 'Diese Station abschließen',
		closeSure: (bay) => `${bay} abschließen?`,
		closed: (word) => `Abgeschlossen: ${word}`,
		waitsClosed: (word) => `Hier abgeschlossen, wartet auf das Senden: ${word}`,
		additions: 'Kam nach dem Abschluss',
		added: 'als Zusatz festgehalten: Jemand anderes hatte die Station abgeschlossen',
		timeline: (id, outcome) => `Einsatz ${id}: ${outcome}`,
		end: 'Rundgang beenden',
		endSure: (n) =>
			n === 0
				? 'Alle Stationen sind erledigt.'
				: `${n === 1 ? '1 Station ist' : `${n} Stationen sind`} nicht erledigt und ${n === 1 ? 'geht' : 'gehen'} zurück auf die Liste.`,
		ended: 'Dieser Rundgang ist vorbei.',
		over: (time) => `vorbei seit ${time}`,
		print: 'Rundgang drucken',
		back: 'Lassen',
		by: (name) => `von ${name}`,
		notYours: (name) =>
			`Das geht ${name}. Sie können auch etwas festhalten; jedes steht unter dem, der es tat.`,
		offline:
			'Keine Verbindung. Was Sie festhalten, bleibt in diesem Browser und wird später gesendet.',
		again: 'Lodekeep antwortet wieder.',
		reopen: 'Blatt öffnen',
		toPlan: 'Der alte Plan',
		asOf: (time) => `Stand ${time}`,
		old: (age) =>
			`So hatte es dieser Browser zuletzt, vor ${age}. Andere können seither Stationen abgeschlossen haben.`,
		unsure: 'Etwas von dieser Station wurde abgelehnt: siehe ‚Was wartet‘ oben.'
	},
	waiting: {
		title: 'Was auf das Senden wartet',
		noAnswer: 'keine Verbindung',
		none: 'Alles hier Festgehaltene ist gesendet.',
		count: (n) =>
			n === 1 ? '1 Eintrag wartet auf das Senden' : `${n} Einträge warten auf das Senden`,
		others: (n) =>
			`${n === 1 ? '1 Eintrag' : `${n} Einträge`} einer anderen Person ${n === 1 ? 'wartet' : 'warten'} in diesem Browser, versiegelt; gesendet wird, wenn sie sich hier anmeldet.`,
		state: {
			waiting: 'wartet auf eine Verbindung',
			sending: 'wird gesendet',
			held: 'wartet auf Ihre Anmeldung',
			refused: 'wurde abgelehnt',
			unreadable: 'lässt sich nicht öffnen'
		},
		sealed: 'Versiegelt: melden Sie sich an als die Person, die es festhielt.',
		sendNow: 'Jetzt senden',
		again: 'Noch einmal senden',
		discard: 'Verwerfen',
		discardSure: 'Diesen Eintrag verwerfen? Er wurde nie gesendet und kommt nicht zurück.',
		what: {
			tick: (check) => `Prüfpunkt ‚${check}‘`,
			part: (n, part) => `Teile: ${n} ${part}`,
			note: 'eine Notiz',
			outcome: (word) => `Ergebnis ‚${word}‘`,
			photo: 'ein Foto'
		},
		at: (what, bay, time) => `${bay}, ${time}: ${what}`,
		cannot: 'Dieser Browser kann hier ohne Verbindung nichts festhalten: Dazu ist https nötig.',
		noKey: 'Öffnen Sie diesen Rundgang einmal mit Verbindung, dann geht das Festhalten auch ohne.',
		full: 'In diesem Browser ist kein Platz mehr. Senden Sie zuerst, was wartet.',
		unreadableCure:
			'Er wurde versiegelt, bevor das Geheimnis dieser Installation zweimal gewechselt wurde. Er lässt sich nur verwerfen.',
		added: (n) =>
			`${n === 1 ? '1 Eintrag wurde' : `${n} Einträge wurden`} als Zusatz festgehalten: Jemand anderes hatte die Station abgeschlossen.`
	}
};

/** The words of visits in the language that speaks. */
export const visitsWords = area(en, de);
