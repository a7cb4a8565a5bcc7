import { area } from './index';

const many = (n: number, one: string, several: string): string => `${n} ${n === 1 ? one : several}`;

/** The sheets of notices, and what mail says of a notice. Kinds are named as the API names them. */
export const noticesWords = area(
	{
		kind: {
			site_late: 'site late',
			mail_failing: 'mail failing',
			silent: 'silent',
			inverted: 'film inverted',
			clipped: 'clipped',
			refresh_not_cured: 'film refresh did not cure it',
			refresh_due: 'film refresh due',
			drifting: 'drifting',
			reference_vehicle: 'reference may hold a vehicle',
			low_cell: 'low cell',
			rejected_frames: 'frames refused',
			clock_off: 'clock off'
		},
		/** What is done next, and where several stand together. */
		next: {
			site_late: 'look at the site’s network and the broker',
			mail_failing: 'correct the address or the mail server',
			silent: 'look at the gateway, then send someone',
			inverted: 'approve a film refresh',
			clipped: 'send someone to look for a magnet or steel',
			refresh_not_cured: 'plan a visit',
			refresh_due: 'approve a film refresh',
			drifting: 'watch it; a pair tells the cause',
			reference_vehicle: 'look at the bay and settle it',
			low_cell: 'plan a change of the cell',
			rejected_frames: 'check its key and profile',
			clock_off: 'none as long as it is heard; its times are shifted to arrival'
		},
		/** What happens if nobody acts. */
		otherwise: {
			site_late: 'all its bays turn not known',
			mail_failing: 'nobody at this address is told of anything',
			silent: 'the bay stays not known',
			inverted: 'the state is right only as long as nothing else moves the field',
			clipped: 'the bay stays not known',
			refresh_not_cured: 'the drift goes on and the states turn wrong',
			refresh_due: 'the drift goes on until the states turn wrong',
			drifting: 'it comes to a film refresh due',
			reference_vehicle: 'free and taken may stand the wrong way round',
			low_cell: 'the node falls silent',
			rejected_frames: 'what it says is not believed',
			clock_off: 'late frames of it stand at the wrong time'
		},
		/** What to bring, where somebody must go. */
		bring: {
			silent: 'a spare node of the same profile, a cell, the key sheet of today',
			clipped: 'a torch, and something to lift a magnet with; no magnet of your own',
			refresh_not_cured:
				'a spare node of the same profile, coring and sealing tools, the key sheet of today',
			low_cell: 'a cell of the profile’s kind, seals; the maker’s handling rules'
		},
		sameProfile: 'the same profile',
		unknownNext: 'look at it',
		/** Short cause for a title: what the notices of a group have in common. */
		cause: {
			refresh_due: 'film loss',
			inverted: 'film flipped',
			drifting: 'drift',
			clipped: 'overloaded',
			low_cell: 'low cell'
		},
		/** Done for all at once. */
		together: {
			refresh_due: 'approve together',
			inverted: 'approve together',
			clipped: 'one visit',
			low_cell: 'one visit',
			refresh_not_cured: 'one visit',
			silent: 'look at what they share, then one visit'
		},
		how: {
			healed: 'healed by itself',
			proved: 'proved cured',
			visit: 'closed by a visit',
			removed: 'the node was taken out',
			folded: 'told together with others'
		},
		orMore: (n: number) => `${many(n, 'day', 'days')} left or more`,
		underADay: 'less than a day left',
		daysLeft: (n: number) => `${many(n, 'day', 'days')} left`,
		daysBetween: (from: number, to: number) => `${from} to ${to} days left`,
		sharedSite: 'from all over the site',
		sharedGateway: (label: string) => `all by ${label}`,
		sharedNetwork: (label: string) => `all behind ${label}`,
		sharedZone: (label: string) => `all in ${label}`,
		storm: (since: string, n: number, of: number, by: string) =>
			`Since ${since}, ${n} of ${of} nodes not heard, ${by}`,
		notices: (n: number) => many(n, 'notice', 'notices'),
		zone: (name: string) => `Zone ${name}`,
		nodesWhere: (n: number, where: string, cause: string) => `${n} nodes, ${where}, ${cause}`,
		anAddress: 'an address',
		aPerson: 'a person',
		framesRefused: (why: string) => `frames refused: ${why}`,
		unexplained: (mg: number) => `${mg} mG unexplained`,
		rate: (mg: string) => `, ${mg} mG a day more`,
		cell: (mv: number) => `cell ${mv} mV`,
		entry: {
			opened: (kinds: string) => `opened: ${kinds}`,
			reopened: (times: string, kinds: string) => `open again, time ${times} of it: ${kinds}`,
			kind: (kinds: string) => `now: ${kinds}`,
			awaitsProof: 'the condition has ended; it waits for the proof of a film refresh',
			taken: (name: string) => `${name} took it`,
			handed: (name: string) => `handed on to ${name}`,
			givenBack: 'given back',
			snoozed: (until: string) => `asleep until ${until}`,
			deputy: 'nobody took it: to the deputy',
			admins: 'nobody took it: to the admins',
			closed: (how: string) => `closed: ${how}`
		},
		sheet: {
			headingAll: 'Notices of all sites',
			heading: (site: string) => `Notices of ${site}`,
			firstTime: (n: number) =>
				`You are here for the first time: ${many(n, 'notice', 'notices')} open.`,
			since: (when: string, n: number, taken: number, closed: number) =>
				`Since you were last here, ${when}: ${many(n, 'new notice', 'new notices')}, ${taken} taken, ${closed} closed.`,
			show: 'Show',
			views: {
				nobody: 'nobody has it yet',
				mine: 'mine',
				open: 'all that are open',
				snoozed: 'asleep'
			},
			allOfGroup: (n: number) => `all ${n}`,
			ofGroup: (title: string) => `of ${title}`,
			emptyNobody: 'Nothing waits for a person.',
			emptyNobodyWhy: 'What needs somebody shows here by itself, and is mailed.',
			empty: 'None here.',
			emptyWhy: 'Choose another view above.',
			more: 'There are more; the nearest deadlines are shown.',
			ended: (n: number, healed: number) =>
				`${many(n, 'notice', 'notices')} closed in the last 7 days, ${healed} healed by themselves`,
			toAll: 'Notices of all sites',
			toSettings: 'What is mailed to you, and when'
		},
		line: {
			select: (what: string, word: string) => `Select ${what}, ${word}`,
			since: 'since',
			times: (n: number) => `has come and gone ${n} times`,
			also: (kinds: string) => `also: ${kinds}`,
			byProof: 'closes only by the proof of a film refresh',
			otherwise: (what: string) => `If nobody acts: ${what}`,
			mine: 'you have it',
			nobody: 'nobody has it yet',
			wasToTake: 'was to be taken by',
			takeBy: 'take by',
			stage: ['', 'with the deputy', 'with the admins'],
			asleep: (until: string) => `asleep until ${until}`,
			history: 'History',
			ofNotice: (what: string, word: string) => `of ${what}, ${word}`,
			mailedNoMore: (name: string) => `${name} is mailed no more`,
			mailedAt: (name: string, at: string) => `${name} is mailed ${at}`,
			told: (name: string, at: string) => `${name} was told ${at}`,
			nobodyMailed: 'nobody is mailed of it'
		},
		acts: {
			group: 'What to do with those selected',
			none: 'none selected',
			selected: (n: number) => `${n} selected`,
			take: 'Take',
			hand: 'Hand on',
			snooze: 'Snooze',
			comment: 'Comment',
			giveBack: 'Give back',
			keep: 'Keep',
			choose: 'choose a person',
			to: 'To',
			toHint: 'they get a mail',
			until: 'Until',
			untilHint: (zone: string) => `${zone}; it asks for nobody until then, 30 days at the most`,
			done: {
				take: 'taken; the others told of it are mailed',
				give_back: 'given back',
				hand: 'handed on',
				snooze: 'asleep',
				comment: 'commented'
			},
			said: (n: number, done: string, left: number) =>
				`${many(n, 'notice', 'notices')} ${done}${left > 0 ? `; ${left} left as they were` : ''}`,
			notDone: 'It was not done.',
			noAnswer: 'It was not done: the server did not answer. Try again.'
		},
		refused: {
			integrator: 'Ask somebody of maintenance: your role does not hold notices.',
			gone: 'This person is not here any more.',
			outside: (name: string) =>
				`${name} does not have all of these sites, or may not hold notices.`,
			operatorSnooze: 'Snoozing is for maintenance: ask them, or take it yourself.',
			past: 'Say a time that is still to come.',
			tooLong: (days: number) => `A notice sleeps for ${days} days at the most.`,
			missing: 'Something is missing.',
			noPerson: 'Only a person does this.'
		}
	},
	{
		kind: {
			site_late: 'Standort im Verzug',
			mail_failing: 'Post kommt nicht an',
			silent: 'stumm',
			inverted: 'Film umgeklappt',
			clipped: 'übersteuert',
			refresh_not_cured: 'Filmauffrischung half nicht',
			refresh_due: 'Filmauffrischung fällig',
			drifting: 'driftet',
			reference_vehicle: 'im Bezug steht vielleicht ein Fahrzeug',
			low_cell: 'Zelle schwach',
			rejected_frames: 'Nachrichten abgewiesen',
			clock_off: 'Uhr geht falsch'
		},
		next: {
			site_late: 'nach dem Netz des Standorts und dem Vermittler sehen',
			mail_failing: 'die Adresse oder den Postserver berichtigen',
			silent: 'nach dem Funkzugang sehen, dann jemanden schicken',
			inverted: 'eine Filmauffrischung genehmigen',
			clipped: 'jemanden schicken, der nach einem Magneten oder Stahl sieht',
			refresh_not_cured: 'einen Einsatz planen',
			refresh_due: 'eine Filmauffrischung genehmigen',
			drifting: 'beobachten; ein Pulspaar nennt die Ursache',
			reference_vehicle: 'den Stellplatz ansehen und klären',
			low_cell: 'einen Wechsel der Zelle planen',
			rejected_frames: 'Schlüssel und Profil prüfen',
			clock_off: 'nichts, solange er gehört wird; seine Zeiten gelten ab Ankunft'
		},
		otherwise: {
			site_late: 'alle seine Stellplätze werden nicht bekannt',
			mail_failing: 'unter dieser Adresse erfährt niemand etwas',
			silent: 'der Stellplatz bleibt nicht bekannt',
			inverted: 'der Zustand stimmt nur, solange sonst nichts das Feld bewegt',
			clipped: 'der Stellplatz bleibt nicht bekannt',
			refresh_not_cured: 'die Drift geht weiter und die Zustände werden falsch',
			refresh_due: 'die Drift geht weiter, bis die Zustände falsch werden',
			drifting: 'es wird eine Filmauffrischung fällig',
			reference_vehicle: 'frei und belegt sind vielleicht vertauscht',
			low_cell: 'der Knoten verstummt',
			rejected_frames: 'was er sagt, wird nicht geglaubt',
			clock_off: 'verspätete Nachrichten stehen zur falschen Zeit'
		},
		bring: {
			silent: 'einen Ersatzknoten mit demselben Profil, eine Zelle, das Schlüsselblatt von heute',
			clipped: 'eine Lampe und etwas, um einen Magneten zu heben; keinen eigenen Magneten',
			refresh_not_cured:
				'einen Ersatzknoten mit demselben Profil, Bohr- und Dichtwerkzeug, das Schlüsselblatt von heute',
			low_cell: 'eine Zelle nach dem Profil, Dichtungen; die Vorschriften des Herstellers'
		},
		sameProfile: 'demselben Profil',
		unknownNext: 'ansehen',
		cause: {
			refresh_due: 'Filmverlust',
			inverted: 'Film umgeklappt',
			drifting: 'Drift',
			clipped: 'übersteuert',
			low_cell: 'Zelle schwach'
		},
		together: {
			refresh_due: 'gemeinsam genehmigen',
			inverted: 'gemeinsam genehmigen',
			clipped: 'ein Einsatz',
			low_cell: 'ein Einsatz',
			refresh_not_cured: 'ein Einsatz',
			silent: 'ansehen, was sie teilen, dann ein Einsatz'
		},
		how: {
			healed: 'von selbst vergangen',
			proved: 'nachweislich behoben',
			visit: 'durch einen Einsatz erledigt',
			removed: 'der Knoten wurde ausgebaut',
			folded: 'mit anderen zusammen gemeldet'
		},
		orMore: (n) => `noch ${many(n, 'Tag', 'Tage')} oder mehr`,
		underADay: 'weniger als ein Tag',
		daysLeft: (n) => `noch ${many(n, 'Tag', 'Tage')}`,
		daysBetween: (from, to) => `noch ${from} bis ${to} Tage`,
		sharedSite: 'am ganzen Standort',
		sharedGateway: (label) => `alle über ${label}`,
		sharedNetwork: (label) => `alle hinter ${label}`,
		sharedZone: (label) => `alle in ${label}`,
		storm: (since, n, of, by) => `Seit ${since} sind ${n} von ${of} Knoten nicht zu hören, ${by}`,
		notices: (n) => many(n, 'Meldung', 'Meldungen'),
		zone: (name) => `Zone ${name}`,
		nodesWhere: (n, where, cause) => `${n} Knoten, ${where}, ${cause}`,
		anAddress: 'eine Adresse',
		aPerson: 'eine Person',
		framesRefused: (why) => `Nachrichten abgewiesen: ${why}`,
		unexplained: (mg) => `${mg} mG nicht erklärt`,
		rate: (mg) => `, täglich ${mg} mG mehr`,
		cell: (mv) => `Zelle ${mv} mV`,
		entry: {
			opened: (kinds) => `eröffnet: ${kinds}`,
			reopened: (times, kinds) => `wieder offen, zum ${times}. Mal: ${kinds}`,
			kind: (kinds) => `jetzt: ${kinds}`,
			awaitsProof: 'der Zustand ist vorbei; es fehlt der Nachweis einer Filmauffrischung',
			taken: (name) => `${name} hat sie übernommen`,
			handed: (name) => `weitergegeben an ${name}`,
			givenBack: 'zurückgegeben',
			snoozed: (until) => `ruht bis ${until}`,
			deputy: 'niemand hat sie übernommen: an die Vertretung',
			admins: 'niemand hat sie übernommen: an die Verwaltung',
			closed: (how) => `geschlossen: ${how}`
		},
		sheet: {
			headingAll: 'Meldungen aller Standorte',
			heading: (site) => `Meldungen von ${site}`,
			firstTime: (n) =>
				`Sie sind zum ersten Mal hier: ${many(n, 'Meldung ist', 'Meldungen sind')} offen.`,
			since: (when, n, taken, closed) =>
				`Seit Sie zuletzt hier waren, ${when}: ${many(n, 'neue Meldung', 'neue Meldungen')}, ${taken} übernommen, ${closed} geschlossen.`,
			show: 'Zeigen',
			views: {
				nobody: 'noch von niemandem übernommen',
				mine: 'meine',
				open: 'alle offenen',
				snoozed: 'ruhende'
			},
			allOfGroup: (n) => `alle ${n}`,
			ofGroup: (title) => `von ${title}`,
			emptyNobody: 'Nichts wartet auf eine Person.',
			emptyNobodyWhy: 'Was jemanden braucht, erscheint hier von selbst und kommt per Mail.',
			empty: 'Hier ist keine.',
			emptyWhy: 'Wählen Sie oben eine andere Ansicht.',
			more: 'Es gibt mehr; gezeigt sind die mit den nächsten Fristen.',
			ended: (n, healed) =>
				`${many(n, 'Meldung', 'Meldungen')} in den letzten 7 Tagen geschlossen, ${healed} von selbst vergangen`,
			toAll: 'Meldungen aller Standorte',
			toSettings: 'Was Ihnen gemailt wird, und wann'
		},
		line: {
			select: (what, word) => `${what}, ${word} auswählen`,
			since: 'seit',
			times: (n) => `kam und ging ${n}-mal`,
			also: (kinds) => `auch: ${kinds}`,
			byProof: 'schließt nur durch den Nachweis einer Filmauffrischung',
			otherwise: (what) => `Wenn niemand etwas tut: ${what}`,
			mine: 'Sie haben sie',
			nobody: 'noch von niemandem übernommen',
			wasToTake: 'war zu übernehmen bis',
			takeBy: 'zu übernehmen bis',
			stage: ['', 'bei der Vertretung', 'bei der Verwaltung'],
			asleep: (until) => `ruht bis ${until}`,
			history: 'Verlauf',
			ofNotice: (what, word) => `von ${what}, ${word}`,
			mailedNoMore: (name) => `${name} bekommt keine Mail mehr`,
			mailedAt: (name, at) => `${name} bekommt eine Mail ${at}`,
			told: (name, at) => `${name} weiß es seit ${at}`,
			nobodyMailed: 'niemand bekommt eine Mail davon'
		},
		acts: {
			group: 'Was mit den ausgewählten geschieht',
			none: 'keine ausgewählt',
			selected: (n) => `${n} ausgewählt`,
			take: 'Übernehmen',
			hand: 'Weitergeben',
			snooze: 'Ruhen lassen',
			comment: 'Anmerken',
			giveBack: 'Zurückgeben',
			keep: 'Behalten',
			choose: 'eine Person wählen',
			to: 'An',
			toHint: 'sie bekommt eine Mail',
			until: 'Bis',
			untilHint: (zone) => `${zone}; bis dahin fragt sie nach niemandem, höchstens 30 Tage`,
			done: {
				take: 'übernommen; die anderen bekommen eine Mail',
				give_back: 'zurückgegeben',
				hand: 'weitergegeben',
				snooze: 'ruhend',
				comment: 'mit Anmerkung'
			},
			said: (n, done, left) =>
				`${many(n, 'Meldung', 'Meldungen')} ${done}${left > 0 ? `; ${left} blieben, wie sie waren` : ''}`,
			notDone: 'Es ist nicht geschehen.',
			noAnswer: 'Es ist nicht geschehen: der Server hat nicht geantwortet. Noch einmal versuchen.'
		},
		refused: {
			integrator: 'Fragen Sie jemanden von der Instandhaltung: Ihre Rolle hält keine Meldungen.',
			gone: 'Diese Person ist nicht mehr hier.',
			outside: (name) => `${name} hat nicht alle diese Standorte oder darf keine Meldungen halten.`,
			operatorSnooze:
				'Ruhen lassen ist Sache der Instandhaltung: fragen Sie dort, oder übernehmen Sie sie.',
			past: 'Nennen Sie eine Zeit, die noch kommt.',
			tooLong: (days) => `Eine Meldung ruht höchstens ${days} Tage.`,
			missing: 'Etwas fehlt.',
			noPerson: 'Das tut nur eine Person.'
		}
	}
);
