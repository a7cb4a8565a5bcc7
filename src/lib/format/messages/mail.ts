import { area } from './index';

/** What a mail of notices says around the notices themselves; causes are named as drift names them. */
export const mailWords = area(
	{
		lang: 'en',
		siteLate: (site: string, since: string) => `${site}: site late since ${since}`,
		mailFailing: (address: string) => `Mail failing: ${address}`,
		reply: 'Re: ',
		nobodyHasIt: 'Nobody has it: ',
		notices: (site: string, n: number) => `${site}: ${n} notices`,
		at: (bays: string) => ` at ${bays}`,
		and: (n: number) => `and ${n} more`,
		andMore: (n: number) => `and ${n} more: see the sheet`,
		hasItNow: (name: string) => `${name} has it now.`,
		hasIt: (name: string) => `${name} has it.`,
		over: (how: string) => `It is over: ${how}.`,
		deputy: 'Nobody has taken it in time. You are named as deputy.',
		admins: 'Nobody has taken it in time, nor a deputy. It comes to the admins.',
		was: (word: string) => `It was '${word}' before.`,
		again: (times: number) => `It is back: this is time ${times} of it.`,
		label: {
			where: 'Where',
			position: 'Position',
			since: 'Since',
			cause: 'Cause',
			drift: 'Drift',
			bays: 'Bays',
			cell: 'Cell',
			next: 'Next',
			otherwise: 'If nobody acts',
			tonight: 'Tonight',
			bring: 'Bring',
			takeBy: 'Take it by',
			site: 'Site',
			sheet: 'Sheet',
			asOf: 'As of'
		},
		where: (bay: string, zone: string | null, site: string, node: string) =>
			`bay ${bay}${zone === null ? '' : `, zone ${zone}`}, ${site}; node ${node}`,
		tonight: {
			off: 'no rule will do it: it waits for a person',
			notFor: 'the rule of this site is not for this cause: it waits for a person',
			will: (from: string, to: string) =>
				`a rule will do it, ${from} to ${to} at the site, once the bay is free and its turn comes`,
			asked: 'a film refresh is asked for: it waits for somebody to approve it',
			underWay: 'a film refresh is under way'
		},
		cause: {
			bridge: 'the offset of bridge and electronics has moved',
			film: 'the film has lost magnetization, as a pulse has measured',
			gain_or_field: 'gain or field: weaker in the same direction; no pulse cures it',
			tilt: 'consistent with a tilt of the node',
			steel_or_works: 'steel or works near the node',
			inverted: 'the film has flipped: a strong field came near',
			unexplained:
				'not temperature, not the geomagnetic field, not the bridge: most likely film loss, until a pulse measures it'
		},
		causeMg: (cause: string, mg: number) => `${cause} (${mg} mG)`,
		framesRefused: (why: string) => `frames refused: ${why}`,
		serverSays: (reply: string) => `the mail server says: ${reply}`,
		consequence: (what: string, left: string | null) => (left === null ? what : `${what}: ${left}`),
		since: (at: string) => `since ${at}`,
		takeBy: (at: string) => `take by ${at}`,
		sheetName: 'notices, by mail',
		allOfLodekeep: 'all of Lodekeep',
		plotNow: 'now',
		plot: (nowMg: number | null) =>
			`Unexplained drift over the last days${nowMg === null ? '' : `, now ${nowMg} mG`}, against its limits`,
		openSheet: 'Open the sheet',
		openRefreshes: 'Film refreshes',
		dossier: (bay: string) => `Dossier of ${bay}`,
		takeOne: 'I take it',
		takeMany: 'I take them',
		to: (name: string) => `To ${name}, who has this site.`,
		settings: 'What is mailed, and when',
		noMore: 'No more mail of notices'
	},
	{
		lang: 'de',
		siteLate: (site, since) => `${site}: Standort im Verzug seit ${since}`,
		mailFailing: (address) => `Post kommt nicht an: ${address}`,
		reply: 'Re: ',
		nobodyHasIt: 'Von niemandem übernommen: ',
		notices: (site, n) => `${site}: ${n} Meldungen`,
		at: (bays) => ` an ${bays}`,
		and: (n) => `und ${n} weitere`,
		andMore: (n) => `und ${n} weitere: siehe das Blatt`,
		hasItNow: (name) => `${name} hat sie jetzt übernommen.`,
		hasIt: (name) => `${name} hat sie übernommen.`,
		over: (how) => `Es ist vorbei: ${how}.`,
		deputy: 'Niemand hat sie rechtzeitig übernommen. Sie sind als Vertretung genannt.',
		admins:
			'Niemand hat sie rechtzeitig übernommen, auch keine Vertretung. Sie geht an die Verwaltung.',
		was: (word) => `Vorher war es '${word}'.`,
		again: (times) => `Es ist wieder da: zum ${times}. Mal.`,
		label: {
			where: 'Wo',
			position: 'Lage',
			since: 'Seit',
			cause: 'Ursache',
			drift: 'Drift',
			bays: 'Stellplätze',
			cell: 'Zelle',
			next: 'Nächstes',
			otherwise: 'Sonst',
			tonight: 'Heute Nacht',
			bring: 'Mitbringen',
			takeBy: 'Übernehmen bis',
			site: 'Standort',
			sheet: 'Blatt',
			asOf: 'Stand'
		},
		where: (bay, zone, site, node) =>
			`Stellplatz ${bay}${zone === null ? '' : `, Zone ${zone}`}, ${site}; Knoten ${node}`,
		tonight: {
			off: 'keine Regel tut es: es wartet auf eine Person',
			notFor: 'die Regel dieses Standorts gilt nicht für diese Ursache: es wartet auf eine Person',
			will: (from, to) =>
				`eine Regel tut es, ${from} bis ${to} am Standort, sobald der Stellplatz frei und er an der Reihe ist`,
			asked: 'eine Filmauffrischung ist erbeten: jemand muss sie genehmigen',
			underWay: 'eine Filmauffrischung ist im Gang'
		},
		cause: {
			bridge: 'der Offset von Brücke und Elektronik hat sich verschoben',
			film: 'der Film hat Magnetisierung verloren, wie ein Puls gemessen hat',
			gain_or_field:
				'Empfindlichkeit oder Feld: schwächer in gleicher Richtung; kein Puls behebt das',
			tilt: 'passt zu einem gekippten Knoten',
			steel_or_works: 'Stahl oder Bauarbeiten beim Knoten',
			inverted: 'der Film ist umgeklappt: ein starkes Feld war nahe',
			unexplained:
				'nicht Temperatur, nicht Erdfeld, nicht Brücke: wohl Filmverlust, bis ein Puls es misst'
		},
		causeMg: (cause, mg) => `${cause} (${mg} mG)`,
		framesRefused: (why) => `Nachrichten abgewiesen: ${why}`,
		serverSays: (reply) => `der Postserver sagt: ${reply}`,
		consequence: (what, left) => (left === null ? what : `${what}: ${left}`),
		since: (at) => `seit ${at}`,
		takeBy: (at) => `übernehmen bis ${at}`,
		sheetName: 'Meldungen, per Mail',
		allOfLodekeep: 'ganz Lodekeep',
		plotNow: 'jetzt',
		plot: (nowMg) =>
			`Nicht erklärte Drift der letzten Tage${nowMg === null ? '' : `, jetzt ${nowMg} mG`}, gegen ihre Grenzen`,
		openSheet: 'Das Blatt öffnen',
		openRefreshes: 'Filmauffrischungen',
		dossier: (bay) => `Akte von ${bay}`,
		takeOne: 'Ich übernehme sie',
		takeMany: 'Ich übernehme sie alle',
		to: (name) => `An ${name}, für diesen Standort.`,
		settings: 'Was gemailt wird, und wann',
		noMore: 'Keine Mail von Meldungen mehr'
	}
);
