import { area, words, type Widened } from './index';

/** The drift board and a node's drift by cause. */
const en = {
	heading: (site: string) => `Drift at ${site}`,
	noAnswer: (length: string) => `no answer for ${length}`,
	asking: 'asking how the nodes drift …',
	none: 'No node is placed here yet.',
	noneCure: 'Drift is told from the first hours after a reference is accepted.',
	standsStill: (error: string) => `${error} What is shown stands still.`,
	zone: 'Zone',
	cause: 'Cause',
	all: 'all',
	onlyMoving: 'Only past a limit',
	shownOf: (shown: number, all: number) => `${shown} of ${all} nodes`,
	noFit: 'No node fits.',
	noFitCure: 'Choose another zone or cause.',
	nodeOf: (bay: string, serial: string) => `${bay}, node ${serial}`,
	lineTitle: 'What the whole site saw',
	sum: (due: number, drifting: number, visit: number, mute: number) =>
		`: film refresh due ${due}, drifting ${drifting}, a visit ${visit}; ${mute} cannot be judged yet.`,
	noHour: 'No hour is closed yet.',
	closedTo: 'Closed up to',
	limits: (drifting: string, refresh: string, hours: number) =>
		`Drifting from ${drifting}, film refresh due from ${refresh} for ${hours} h, both less two standard errors.`,
	pairsByRule: 'Pairs by rule:',
	changeRule: 'Change the rule',
	pairRule: { never: 'never', calibrate: 'calibrate', diagnose: 'diagnose' },
	pairRuleSays: {
		never: '. Causes that only a pair tells stay unexplained.',
		calibrate: ', weekly in an empty bay.',
		diagnose: ', weekly and on drift.'
	},
	arrowsChoose: 'Up and down arrows in the list choose a node.',
	how: 'How this is decided',
	byDrift: 'Nodes by drift',
	ranked: 'Nodes ranked by unexplained drift',
	bay: 'Bay',
	unexplained: 'Unexplained',
	rate: 'Rate',
	toLimit: 'To the limit',
	next: 'Next',
	refreshDue: (reasons: string) => `film refresh due: ${reasons}`,
	byCusum: 'drifting, by the sum of days',
	drifting: 'drifting',
	noneAhead: 'none ahead',
	to: (field: string) => `to ${field}`,
	dossier: 'Dossier',
	ofBay: (bay: string) => `of ${bay}`,
	firstOnly: (n: number) => `The first ${n} only`,
	allNodes: (n: number) => `All ${n} nodes`,
	causes: {
		temperature: 'temperature',
		geomagnetic: 'geomagnetic weather',
		bridge: 'bridge offset',
		film: 'film',
		gain_or_field: 'gain or field',
		tilt: 'tilt',
		steel_or_works: 'steel or works',
		unexplained: 'not explained'
	},
	parts: {
		temperatureMg: 'temperature',
		geomagneticMg: 'geomagnetic',
		bridgeMg: 'bridge',
		filmMg: 'film',
		surroundingsMg: 'surroundings',
		unexplainedMg: 'unexplained'
	},
	total: 'total',
	underDay: 'under 1 day',
	under: 'under 1',
	orNever: (from: string) => `${from} days or never`,
	about: (n: number) => `about ${n} ${n === 1 ? 'day' : 'days'}`,
	days: (from: string, to: number) => `${from} to ${to} days`,
	fewDays: 'under 5 days known',
	noTrend: 'no trend',
	aDay: (field: string) => `${field} a day`,
	noHourJudged: 'No hour judged yet',
	nothingMoved: 'Nothing moved',
	notJudged: 'not judged',
	cannot: 'cannot be judged',
	sure: (field: string) => `${field} sure`,
	node: {
		span: { h72: '3 days', h336: '2 weeks', h1440: '60 days' },
		asking: 'asking for its drift …',
		none: 'No drift is told of this node.',
		noneWhy: 'It lies in no bay.',
		driftingSince: (time: string) => `Drifting since ${time}.`,
		due: (reasons: string) => `Film refresh due: ${reasons}.`,
		since: (what: string, time: string) => `${what} (since ${time})`,
		visit: (why: string) => `A visit: ${why}.`,
		rate: (rate: string, days: string | null, limit: string) =>
			`Rate: ${rate}${days === null ? '' : `, ${days} to ${limit}`}.`,
		next: (what: string) => `Next: ${what}.`,
		noHour: 'No hour is judged yet.',
		noHourWhy: 'It needs an accepted reference, a temperature slope and hours with the bay empty.',
		timeShown: 'Time shown',
		chart: 'Control chart',
		temperature: 'Temperature',
		pairs: 'Pairs of pulses'
	},
	chart: {
		none: 'A control chart begins after five days with the bay empty for some hours.',
		axis: (name: string) => `Unexplained ${name}`,
		unit: 'mG, daily',
		median: 'daily median'
	},
	figures: {
		title: 'Drift in figures',
		hour: (time: string) => `Hour from ${time},`,
		readings: (n: number) => `${n} still readings,`,
		unit: 'mG since the reference in the node’s own axes',
		part: 'Part',
		length: 'length'
	},
	stack: {
		title: 'Drift by cause',
		unit: 'mG along the largest drift shown',
		read: (time: string, total: string) => `${time}: total ${total}`
	},
	line: {
		none: 'No hour of the site is closed yet.',
		few: 'Fewer nodes with a known slope than the line needs: geomagnetic change is not taken out.',
		notKnown: 'Site-wide change, cause not known: the nodes disagree, so nothing is taken out.',
		median: (nodes: number, spread: string) => `Median of ${nodes} nodes, spread ${spread}.`,
		k: (k: number, from: string) => `K ${k} from ${from}`,
		title: 'Geomagnetic line',
		unit: 'mG since the references',
		along: 'along the horizontal field',
		across: 'across it',
		vertical: 'vertical',
		rangeTitle: 'Range over 3 h',
		rangeUnit:
			'mG, the more disturbed horizontal component; from hourly values, so a lower bound of K',
		range: 'range'
	},
	scatter: {
		none: 'No hour with the bay empty and a temperature yet.',
		unit: 'mG over °C',
		notKnown: 'slope not known',
		slope: (value: string, error: string) => `slope ${value} ± ${error} mG/°C`,
		note: 'mG since the reference over °C; one point an hour with the bay empty'
	},
	pairs: {
		notKnown: 'not known',
		notOrdered: 'not ordered here',
		refresh: 'film refresh',
		byRule: (rule: string) => `by rule: ${rule}`,
		when: 'When',
		why: 'Why',
		told: 'What it told',
		bridgeOnly: 'bridge only: the bay was taken',
		nothing: 'nothing moved',
		lost: 'Film had lost',
		bridge: 'Bridge moved',
		around: 'Surroundings moved',
		offset: 'Offset',
		at: 'At',
		none: 'No accepted pair yet.',
		noneWhy: 'Without one no direction is known: film, gain, tilt and the Earth check are off.'
	}
};
const de: Widened<typeof en> = {
	heading: (site) => `Drift an ${site}`,
	noAnswer: (length) => `keine Antwort seit ${length}`,
	asking: 'es wird gefragt, wie die Knoten driften …',
	none: 'Hier ist noch kein Knoten eingesetzt.',
	noneCure: 'Drift wird ab den ersten Stunden nach der Annahme eines Bezugs gesagt.',
	standsStill: (error) => `${error} Die Anzeige steht still.`,
	zone: 'Zone',
	cause: 'Ursache',
	all: 'alle',
	onlyMoving: 'Nur über einer Grenze',
	shownOf: (shown, all) => `${shown} von ${all} Knoten`,
	noFit: 'Kein Knoten passt.',
	noFitCure: 'Wählen Sie eine andere Zone oder Ursache.',
	nodeOf: (bay, serial) => `${bay}, Knoten ${serial}`,
	lineTitle: 'Was der ganze Standort sah',
	sum: (due, drifting, visit, mute) =>
		`: Filmauffrischung fällig ${due}, driftend ${drifting}, ein Einsatz ${visit}; ${mute} noch nicht zu beurteilen.`,
	noHour: 'Noch ist keine Stunde abgeschlossen.',
	closedTo: 'Abgeschlossen bis',
	limits: (drifting, refresh, hours) =>
		`Driftend ab ${drifting}, Filmauffrischung fällig ab ${refresh} während ${hours} h, beides abzüglich zweier Standardfehler.`,
	pairsByRule: 'Paare durch Regel:',
	changeRule: 'Regel ändern',
	pairRule: { never: 'nie', calibrate: 'Abgleich', diagnose: 'Diagnose' },
	pairRuleSays: {
		never: '. Ursachen, die nur ein Paar sagt, bleiben unerklärt.',
		calibrate: ', wöchentlich bei leerem Stellplatz.',
		diagnose: ', wöchentlich und bei Drift.'
	},
	arrowsChoose: 'Pfeile nach oben und unten wählen in der Liste einen Knoten.',
	how: 'Wie entschieden wird',
	byDrift: 'Knoten nach Drift',
	ranked: 'Knoten, nach unerklärter Drift geordnet',
	bay: 'Platz',
	unexplained: 'Unerklärt',
	rate: 'Rate',
	toLimit: 'Bis zur Grenze',
	next: 'Nächstes',
	refreshDue: (reasons) => `Filmauffrischung fällig: ${reasons}`,
	byCusum: 'driftet, nach der Summe der Tage',
	drifting: 'driftet',
	noneAhead: 'keine voraus',
	to: (field) => `bis ${field}`,
	dossier: 'Akte',
	ofBay: (bay) => `von ${bay}`,
	firstOnly: (n) => `Nur die ersten ${n}`,
	allNodes: (n) => `Alle ${n} Knoten`,
	causes: {
		temperature: 'Temperatur',
		geomagnetic: 'geomagnetisches Wetter',
		bridge: 'Offset der Brücke',
		film: 'Film',
		gain_or_field: 'Verstärkung oder Feld',
		tilt: 'Kippung',
		steel_or_works: 'Stahl oder Arbeiten',
		unexplained: 'nicht erklärt'
	},
	parts: {
		temperatureMg: 'Temperatur',
		geomagneticMg: 'geomagnetisch',
		bridgeMg: 'Brücke',
		filmMg: 'Film',
		surroundingsMg: 'Umgebung',
		unexplainedMg: 'unerklärt'
	},
	total: 'gesamt',
	underDay: 'unter 1 Tag',
	under: 'unter 1',
	orNever: (from) => `${from} Tage oder nie`,
	about: (n) => `etwa ${n} ${n === 1 ? 'Tag' : 'Tage'}`,
	days: (from, to) => `${from} bis ${to} Tage`,
	fewDays: 'unter 5 Tage bekannt',
	noTrend: 'kein Trend',
	aDay: (field) => `${field} am Tag`,
	noHourJudged: 'Noch keine Stunde beurteilt',
	nothingMoved: 'Nichts wanderte',
	notJudged: 'nicht beurteilt',
	cannot: 'nicht zu beurteilen',
	sure: (field) => `${field} sicher`,
	node: {
		span: { h72: '3 Tage', h336: '2 Wochen', h1440: '60 Tage' },
		asking: 'seine Drift wird gefragt …',
		none: 'Von diesem Knoten wird keine Drift gesagt.',
		noneWhy: 'Er liegt in keinem Stellplatz.',
		driftingSince: (time) => `Driftet seit ${time}.`,
		due: (reasons) => `Filmauffrischung fällig: ${reasons}.`,
		since: (what, time) => `${what} (seit ${time})`,
		visit: (why) => `Ein Einsatz: ${why}.`,
		rate: (rate, days, limit) => `Rate: ${rate}${days === null ? '' : `, ${days} bis ${limit}`}.`,
		next: (what) => `Nächstes: ${what}.`,
		noHour: 'Noch ist keine Stunde beurteilt.',
		noHourWhy:
			'Es braucht einen angenommenen Bezug, einen Temperaturgang und Stunden mit leerem Stellplatz.',
		timeShown: 'Gezeigte Zeit',
		chart: 'Regelkarte',
		temperature: 'Temperatur',
		pairs: 'Paare von Pulsen'
	},
	chart: {
		none: 'Eine Regelkarte beginnt nach fünf Tagen, an denen der Platz einige Stunden leer war.',
		axis: (name) => `Unerklärt ${name}`,
		unit: 'mG, täglich',
		median: 'Tagesmedian'
	},
	figures: {
		title: 'Drift in Zahlen',
		hour: (time) => `Stunde ab ${time},`,
		readings: (n) => `${n} stille Messungen,`,
		unit: 'mG seit dem Bezug in den Achsen des Knotens',
		part: 'Teil',
		length: 'Länge'
	},
	stack: {
		title: 'Drift nach Ursache',
		unit: 'mG entlang der größten gezeigten Drift',
		read: (time, total) => `${time}: gesamt ${total}`
	},
	line: {
		none: 'Noch ist keine Stunde des Standorts abgeschlossen.',
		few: 'Weniger Knoten mit bekanntem Temperaturgang, als die Linie braucht: Geomagnetische Änderung wird nicht abgezogen.',
		notKnown:
			'Änderung am ganzen Standort, Ursache nicht bekannt: Die Knoten sind uneinig, darum wird nichts abgezogen.',
		median: (nodes, spread) => `Median von ${nodes} Knoten, Streuung ${spread}.`,
		k: (k, from) => `K ${k} ab ${from}`,
		title: 'Geomagnetische Linie',
		unit: 'mG seit den Bezügen',
		along: 'längs des waagrechten Felds',
		across: 'quer dazu',
		vertical: 'senkrecht',
		rangeTitle: 'Spanne über 3 h',
		rangeUnit:
			'mG, die stärker gestörte waagrechte Komponente; aus Stundenwerten, also eine untere Schranke von K',
		range: 'Spanne'
	},
	scatter: {
		none: 'Noch keine Stunde mit leerem Stellplatz und einer Temperatur.',
		unit: 'mG über °C',
		notKnown: 'Temperaturgang nicht bekannt',
		slope: (value, error) => `Gang ${value} ± ${error} mG/°C`,
		note: 'mG seit dem Bezug über °C; ein Punkt je Stunde mit leerem Stellplatz'
	},
	pairs: {
		notKnown: 'nicht bekannt',
		notOrdered: 'nicht hier bestellt',
		refresh: 'Filmauffrischung',
		byRule: (rule) => `durch Regel: ${rule}`,
		when: 'Wann',
		why: 'Warum',
		told: 'Was es sagte',
		bridgeOnly: 'nur die Brücke: der Stellplatz war belegt',
		nothing: 'nichts wanderte',
		lost: 'Film verlor',
		bridge: 'Brücke wanderte',
		around: 'Umgebung wanderte',
		offset: 'Offset',
		at: 'Bei',
		none: 'Noch kein angenommenes Paar.',
		noneWhy:
			'Ohne eines ist keine Richtung bekannt: Film, Verstärkung, Kippung und der Vergleich mit dem Erdfeld sind aus.'
	}
};
export const driftWords = area(en, de);

/** What the server says of causes, notes and next steps (drift/words.ts), in German by its sentence. */
const SAYS: Readonly<Record<string, string>> = {
	'temperature, taken out': 'Temperatur, abgezogen',
	'nothing to do': 'nichts zu tun',
	'geomagnetic weather over the whole site, taken out':
		'geomagnetisches Wetter am ganzen Standort, abgezogen',
	'the offset of bridge and electronics moved': 'der Offset von Brücke und Elektronik wanderte',
	'the new offset is in use': 'der neue Offset ist in Gebrauch',
	'the film had lost magnetization': 'der Film hatte Magnetisierung verloren',
	'healed by the pulse that measured it': 'geheilt durch den Puls, der es maß',
	'gain or field: weaker in the same direction':
		'Verstärkung oder Feld: schwächer in derselben Richtung',
	'a visit, no pulse cures it': 'ein Einsatz, kein Puls heilt es',
	'consistent with a tilt': 'mit einer Kippung verträglich',
	'a visit: look whether the node sits level': 'ein Einsatz: sehen, ob der Knoten eben sitzt',
	'steel or works near the node': 'Stahl oder Arbeiten nahe am Knoten',
	'look at the bay; a new reference once it is seen empty':
		'den Stellplatz ansehen; ein neuer Bezug, sobald er leer gesehen ist',
	'not explained yet': 'noch nicht erklärt',
	'a pair tells what it is': 'ein Paar sagt, was es ist',
	'temperature slope not known yet': 'Temperaturgang noch nicht bekannt',
	'no temperature near the readings': 'keine Temperatur nahe den Messungen',
	'no pair yet: direction not known': 'noch kein Paar: Richtung nicht bekannt',
	'too few nodes to tell geomagnetic change':
		'zu wenige Knoten, um geomagnetische Änderung zu sagen',
	'site-wide change, cause not known': 'Änderung am ganzen Standort, Ursache nicht bekannt',
	'a reading at the end of the range, no pulse since':
		'eine Messung am Ende des Bereichs, seitdem kein Puls',
	'a field over what the film stands, no pulse since':
		'ein Feld über dem, was der Film aushält, seitdem kein Puls',
	'the film is flipped': 'der Film ist umgeklappt',
	'unexplained drift, no pulse since it began': 'unerklärte Drift, kein Puls, seit sie begann',
	'the offset jumped twice in a month': 'der Offset sprang zweimal in einem Monat',
	'gain still off after a pulse': 'Verstärkung auch nach einem Puls daneben',
	'a film refresh': 'eine Filmauffrischung',
	'nothing yet: no hour of the empty bay is judged':
		'noch nichts: keine Stunde des leeren Stellplatzes ist beurteilt',
	'wait: a pulse was fired, the next hour tells':
		'warten: ein Puls wurde ausgelöst, die nächste Stunde sagt es'
};
const HEADS: readonly (readonly [string, string])[] = [
	['a visit: ', 'ein Einsatz: '],
	['wait: ', 'warten: ']
];

/** A cause, note or next step as the server says it, in the language that speaks. */
export function driftSays(said: string): string {
	if (words().locale !== 'de-DE') return said;
	const whole = SAYS[said];
	if (whole !== undefined) return whole;
	const [head, german] = HEADS.find(([start]) => said.startsWith(start)) ?? ['', ''];
	return german + (SAYS[said.slice(head.length)] ?? said.slice(head.length));
}
