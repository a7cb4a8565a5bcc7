import { area, type Widened } from './index';

/** The dossier of a bay and its node, and the bay record. */
const en = {
	bay: (code: string) => `Bay ${code}`,
	closedUntil: (time: string) => `Closed until ${time}`,
	since: (state: string, time: string) => `${state} since ${time}`,
	heard: (ago: string) => `Heard ${ago}.`,
	because: (reasons: string) => `Because ${reasons}.`,
	against: (reasons: string) => `Against: ${reasons}.`,
	notSeen: 'Not seen by a person yet.',
	seen: (date: string, state: string) => `Last seen by a person: ${date}, ${state}.`,
	doNotRely: (reason: string, time: string) => `Do not rely on this bay: ${reason}, since ${time}.`,
	sentFor: (reason: string) => `Somebody is sent for: ${reason}.`,
	nobodyHas: 'Nobody has it yet.',
	has: (name: string) => `${name} has it.`,
	onPlan: 'On the plan',
	askRefresh: 'Ask for a film refresh',
	record: 'Bay record',
	field: 'Field',
	drift: 'Drift',
	parameters: 'Parameters',
	timeline: 'Timeline',
	noEvidence: 'An occupancy record alone is not evidence of an offence.',
	node: 'Node',
	noNode: 'No node is placed here.',
	accept: {
		ask: 'Accept the reference',
		title: (code: string) => `Accept the reference of ${code}`,
		what: (field: string) =>
			`${field} becomes what the bay is held against. The former reference is kept with its time.`,
		caution:
			'A new reference only with the bay seen empty, also after works or new steel. Look from the footway.',
		seen: 'I see the bay empty now',
		done: (code: string) => `The reference of ${code} is accepted.`
	},
	earth: {
		title: 'Against the Earth',
		model: (field: string, dip: string) => `Model ${field}, dip ${dip}°`,
		modelEnds: '; the model ends with 2029 and is carried on',
		notLearned: 'No quiet field is learned yet.',
		noOffset: 'Off: no pair has measured the sensor’s own offset yet.',
		head: (quiet: string, ratio: string, earth: string) =>
			`Quiet field ${quiet}, ${ratio} of the Earth’s ${earth}`,
		wrong: (head: string, near: string) => `${head}: ratio near ${near}: wrong resolution.`,
		wrongCure:
			'The profile of the other resolution was chosen. Set the right profile before this reference is accepted.',
		off: (head: string, share: number) => `${head}: ${share} % off, more than 35 %.`,
		offCure:
			'Buried steel can do this. Look at the bay and the profile before this reference is accepted.',
		agrees: (head: string, share: number) => `${head}: ${share} % off, as it should be.`
	},
	plots: {
		range: { h2: '2 h', d1: '1 day', d7: '1 week', d30: '30 days', y1: '1 year' },
		baseline: (field: string) => `baseline ${field}`,
		on: (field: string) => `on ${field}`,
		off: (field: string) => `off ${field}`,
		timeShown: 'Time shown',
		from: 'from',
		to: 'to',
		csv: 'CSV of this',
		timesIn: (zone: string) => `times in ${zone}`,
		none: 'No reading in this time.',
		noneWhy: 'The node was not heard, or the time lies before its first message.',
		noBaseline:
			'No disturbance: the node has no baseline yet, and a guess would look like a measurement.',
		disturbance: 'Disturbance',
		fromBaseline: 'mG from the baseline of now',
		axis: (name: string) => `Field ${name}`,
		magnitude: 'Magnitude',
		temperature: 'Temperature'
	},
	facts: {
		condition: 'Condition',
		unsigned: 'unsigned messages allowed',
		heard: 'Heard',
		confidence: 'Confidence',
		noConfidence: 'none while not known',
		disturbance: 'Disturbance',
		noBaseline: 'no baseline yet',
		limits: (d: string, on: string, off: string, isFree: boolean) =>
			`${d}; taken over ${on}, ${isFree ? 'free' : 'this stay ends'} under ${off}`,
		temperature: 'Temperature',
		cell: 'Cell',
		reference: 'Reference',
		noReference: 'none learned yet',
		learned: (field: string, time: string, noise: string) =>
			`${field}, learned ${time}, noise ${noise}`,
		notAccepted: 'not accepted',
		provisional: 'provisional',
		accepted: 'accepted',
		offset: 'Offset in use',
		noPair: 'no pair yet: rules on film, gain and tilt are off',
		profile: 'Profile',
		firmware: (version: string) => `firmware ${version}`,
		reports: 'Reports',
		every: (periodS: number, deltaMg: string) =>
			`every ${periodS} s, and when the field moves by ${deltaMg} mG`
	},
	settings: {
		differs: 'What differs from the default',
		asking: 'asking for its settings …',
		allDefault: (n: number) => `All ${n} settings of this node stand at their default.`,
		some: (n: number, of: number) =>
			n === 1
				? `1 setting of ${of} differs from the default.`
				: `${n} settings of ${of} differ from the default.`,
		all: 'All settings',
		changed: 'Changed for this node',
		changes: 'Changes for this node'
	},
	time: {
		nothing: 'Nothing happened yet.',
		earlier: 'Earlier',
		settled: { seen_vacant: 'seen free', told_vacant: 'told free', seen_occupied: 'seen taken' },
		settledAs: (how: string) => `settled: ${how}`,
		closed: (until: string, reason: string) => `closed until ${until}: ${reason}`,
		acts: {
			act_place: 'node placed',
			act_accept: 'reference accepted',
			act_withdraw: 'node withdrawn',
			act_undo_settle: 'settling undone',
			act_lift: 'closure ended early',
			act_parameters: 'settings of the node changed',
			act_accept_boot: 'boot counter accepted anew',
			act_ask: 'node asked'
		},
		outcomes: ['done', 'refused', 'failed'],
		noAnswer: 'no answer yet',
		command: (name: string, cause: string, outcome: string) =>
			`command ‘${name}’ (${cause}): ${outcome}`,
		waiting: 'waiting',
		learned: (readings: string, noise: string) =>
			`quiet field learned from ${readings} readings, noise ${noise}`,
		byRule: 'accepted by rule',
		accepted: 'accepted',
		notAccepted: 'not accepted yet',
		boot: (cause: string | null, firmware: string | null) =>
			`node booted (${cause ?? 'cause not said'}), firmware ${firmware ?? 'not said'}`,
		closureOver: (finding: string) => `closure over: ${finding}`,
		request: (reason: string) => `somebody sent for: ${reason}`,
		seenTo: (outcome: string) => `seen to: ${outcome}`,
		voided: (event: string) => `taken back: what was said as no. ${event} did not happen`,
		event: (what: string, state: string, from: string) => `${what}: ${state} from ${from}`,
		late: 'found late',
		pulse: {
			pulse_pair: 'SET/RESET pair',
			pulse_ack: 'pulse on command',
			pulse_power: 'power-on SET'
		},
		used: 'taken into use',
		notUsed: (why: string) => `not used: ${why}`,
		notJudged: 'not judged yet',
		/** Causes and refusals as the API says them. */
		values: {
			'settled by hearsay': 'settled by hearsay',
			'long stay': 'long stay',
			learning: 'learning',
			calibrate: 'a pair by rule',
			diagnose: 'a pair on drift',
			'the field moved around it': 'the field moved around it',
			'the reading after it does not repeat the set reading':
				'the reading after it does not repeat the set reading',
			'the closure ends before it begins': 'the closure ends before it begins',
			'the bay is not closed': 'the bay is not closed',
			'the bay has no node': 'the bay has no node',
			'no node': 'no node',
			'as before': 'as before',
			'the node has no accepted quiet field yet': 'the node has no accepted quiet field yet',
			'there is no such settlement to take back': 'there is no such settlement to take back',
			'it is too long ago to take back': 'it is too long ago to take back',
			'the bay has changed since': 'the bay has changed since'
		}
	},
	sheet: {
		name: (code: string) => `Bay record ${code}`,
		heading: (code: string) => `Record of bay ${code}`,
		from: 'From',
		until: 'Until',
		show: 'Show',
		print: 'Print',
		span: (from: string, until: string, zone: string) =>
			`From ${from} until ${until}. Times local to the site, ${zone}.`,
		cut: 'Only the first 1000 entries: choose a shorter time.',
		saidAndKnown: 'What was said, and what is known now',
		saidAt: 'Said at',
		said: 'What was said',
		ofTime: 'Of the time',
		known: 'Known now',
		takenBack: (time: string) => `taken back ${time}: did not happen`,
		stands: 'stands',
		standsLate: (length: string) => `stands; found late, ${length} after it happened`,
		nothing: 'Nothing was said of this bay in this time.',
		stays: 'Stays, as known now',
		length: 'Length',
		goesOn: 'goes on',
		thenUnknown: '(then no longer known)',
		noStay: 'No stay in this time.',
		caution:
			'An occupancy record alone is not evidence of an offence. Occupancy is an estimate from a magnetic field; it says nothing of who or what stood here.'
	}
};
const de: Widened<typeof en> = {
	bay: (code) => `Stellplatz ${code}`,
	closedUntil: (time) => `Gesperrt bis ${time}`,
	since: (state, time) => `${state} seit ${time}`,
	heard: (ago) => `Gehört ${ago}.`,
	because: (reasons) => `Dafür: ${reasons}.`,
	against: (reasons) => `Dagegen: ${reasons}.`,
	notSeen: 'Noch von niemandem gesehen.',
	seen: (date, state) => `Zuletzt von einer Person gesehen: ${date}, ${state}.`,
	doNotRely: (reason, time) =>
		`Verlassen Sie sich nicht auf diesen Stellplatz: ${reason}, seit ${time}.`,
	sentFor: (reason) => `Es ist jemand gerufen: ${reason}.`,
	nobodyHas: 'Noch hat es niemand.',
	has: (name) => `${name} hat es.`,
	onPlan: 'Auf dem Plan',
	askRefresh: 'Um eine Filmauffrischung bitten',
	record: 'Platzprotokoll',
	field: 'Feld',
	drift: 'Drift',
	parameters: 'Parameter',
	timeline: 'Verlauf',
	noEvidence: 'Eine Aufzeichnung der Belegung allein beweist keine Ordnungswidrigkeit.',
	node: 'Knoten',
	noNode: 'Hier ist kein Knoten eingesetzt.',
	accept: {
		ask: 'Bezug annehmen',
		title: (code) => `Bezug von ${code} annehmen`,
		what: (field) =>
			`${field} wird das, woran der Stellplatz gemessen wird. Der frühere Bezug bleibt mit seiner Zeit erhalten.`,
		caution:
			'Ein neuer Bezug nur, wenn der Stellplatz leer gesehen wird, auch nach Arbeiten oder neuem Stahl. Schauen Sie vom Gehweg aus.',
		seen: 'Ich sehe: der Stellplatz ist jetzt leer',
		done: (code) => `Der Bezug von ${code} ist angenommen.`
	},
	earth: {
		title: 'Gegen das Erdfeld',
		model: (field, dip) => `Modell ${field}, Neigung ${dip}°`,
		modelEnds: '; das Modell endet mit 2029 und wird fortgeschrieben',
		notLearned: 'Noch ist kein Ruhefeld gelernt.',
		noOffset: 'Aus: Noch hat kein Paar den eigenen Offset des Sensors gemessen.',
		head: (quiet, ratio, earth) =>
			`Ruhefeld ${quiet}, das ${ratio}-Fache der ${earth} des Erdfelds`,
		wrong: (head, near) => `${head}: Verhältnis nahe ${near}: falsche Auflösung.`,
		wrongCure:
			'Gewählt wurde das Profil der anderen Auflösung. Setzen Sie das richtige Profil, bevor dieser Bezug angenommen wird.',
		off: (head, share) => `${head}: ${share} % daneben, mehr als 35 %.`,
		offCure:
			'Stahl im Boden kann das bewirken. Sehen Sie Stellplatz und Profil an, bevor dieser Bezug angenommen wird.',
		agrees: (head, share) => `${head}: ${share} % daneben, wie es sein soll.`
	},
	plots: {
		range: { h2: '2 h', d1: '1 Tag', d7: '1 Woche', d30: '30 Tage', y1: '1 Jahr' },
		baseline: (field) => `Grundlinie ${field}`,
		on: (field) => `ein ${field}`,
		off: (field) => `aus ${field}`,
		timeShown: 'Gezeigte Zeit',
		from: 'von',
		to: 'bis',
		csv: 'CSV davon',
		timesIn: (zone) => `Zeiten in ${zone}`,
		none: 'Keine Messung in dieser Zeit.',
		noneWhy: 'Der Knoten wurde nicht gehört, oder die Zeit liegt vor seiner ersten Nachricht.',
		noBaseline:
			'Keine Störung: Der Knoten hat noch keine Grundlinie, und eine Vermutung sähe aus wie eine Messung.',
		disturbance: 'Störung',
		fromBaseline: 'mG von der Grundlinie von jetzt',
		axis: (name) => `Feld ${name}`,
		magnitude: 'Betrag',
		temperature: 'Temperatur'
	},
	facts: {
		condition: 'Befund',
		unsigned: 'Nachrichten ohne Signatur erlaubt',
		heard: 'Gehört',
		confidence: 'Sicherheit',
		noConfidence: 'keine, solange nicht bekannt',
		disturbance: 'Störung',
		noBaseline: 'noch keine Grundlinie',
		limits: (d, on, off, isFree) =>
			`${d}; belegt über ${on}, ${isFree ? 'frei' : 'dieser Aufenthalt endet'} unter ${off}`,
		temperature: 'Temperatur',
		cell: 'Zelle',
		reference: 'Bezug',
		noReference: 'noch keiner gelernt',
		learned: (field, time, noise) => `${field}, gelernt ${time}, Rauschen ${noise}`,
		notAccepted: 'nicht angenommen',
		provisional: 'vorläufig',
		accepted: 'angenommen',
		offset: 'Offset',
		noPair: 'noch kein Paar: Regeln zu Film, Verstärkung und Kippung sind aus',
		profile: 'Profil',
		firmware: (version) => `Firmware ${version}`,
		reports: 'Meldet',
		every: (periodS, deltaMg) => `alle ${periodS} s, und wenn das Feld um ${deltaMg} mG wandert`
	},
	settings: {
		differs: 'Was von der Vorgabe abweicht',
		asking: 'die Einstellungen werden gefragt …',
		allDefault: (n) => `Alle ${n} Einstellungen dieses Knotens stehen auf der Vorgabe.`,
		some: (n, of) =>
			n === 1
				? `1 Einstellung von ${of} weicht von der Vorgabe ab.`
				: `${n} Einstellungen von ${of} weichen von der Vorgabe ab.`,
		all: 'Alle Einstellungen',
		changed: 'Für diesen Knoten geändert',
		changes: 'Änderungen für diesen Knoten'
	},
	time: {
		nothing: 'Noch ist nichts geschehen.',
		earlier: 'Früheres',
		settled: {
			seen_vacant: 'frei gesehen',
			told_vacant: 'frei gesagt',
			seen_occupied: 'belegt gesehen'
		},
		settledAs: (how) => `festgestellt: ${how}`,
		closed: (until, reason) => `gesperrt bis ${until}: ${reason}`,
		acts: {
			act_place: 'Knoten eingesetzt',
			act_accept: 'Bezug angenommen',
			act_withdraw: 'Knoten ausgebaut',
			act_undo_settle: 'Feststellung zurückgenommen',
			act_lift: 'Sperrung früher beendet',
			act_parameters: 'Einstellungen des Knotens geändert',
			act_accept_boot: 'Startzähler neu angenommen',
			act_ask: 'Knoten gefragt'
		},
		outcomes: ['getan', 'abgelehnt', 'misslungen'],
		noAnswer: 'noch keine Antwort',
		command: (name, cause, outcome) => `Befehl ‚${name}‘ (${cause}): ${outcome}`,
		waiting: 'wartet',
		learned: (readings, noise) => `Ruhefeld aus ${readings} Messungen gelernt, Rauschen ${noise}`,
		byRule: 'durch Regel angenommen',
		accepted: 'angenommen',
		notAccepted: 'noch nicht angenommen',
		boot: (cause, firmware) =>
			`Knoten gestartet (${cause ?? 'Ursache nicht genannt'}), Firmware ${firmware ?? 'nicht genannt'}`,
		closureOver: (finding) => `Sperrung vorbei: ${finding}`,
		request: (reason) => `jemand gerufen: ${reason}`,
		seenTo: (outcome) => `erledigt: ${outcome}`,
		voided: (event) => `zurückgenommen: Was als Nr. ${event} gesagt wurde, geschah nicht`,
		event: (what, state, from) => `${what}: ${state} ab ${from}`,
		late: 'spät gefunden',
		pulse: {
			pulse_pair: 'SET/RESET-Paar',
			pulse_ack: 'Puls auf Befehl',
			pulse_power: 'SET beim Einschalten'
		},
		used: 'in Gebrauch genommen',
		notUsed: (why) => `nicht verwendet: ${why}`,
		notJudged: 'noch nicht beurteilt',
		values: {
			'settled by hearsay': 'nach Hörensagen festgestellt',
			'long stay': 'lange belegt',
			learning: 'lernt',
			calibrate: 'ein Paar durch Regel',
			diagnose: 'ein Paar bei Drift',
			'the field moved around it': 'das Feld bewegte sich dabei',
			'the reading after it does not repeat the set reading':
				'die Messung danach wiederholt die SET-Messung nicht',
			'the closure ends before it begins': 'die Sperrung endet, bevor sie beginnt',
			'the bay is not closed': 'der Stellplatz ist nicht gesperrt',
			'the bay has no node': 'der Stellplatz hat keinen Knoten',
			'no node': 'kein Knoten',
			'as before': 'wie zuvor',
			'the node has no accepted quiet field yet': 'der Knoten hat noch kein angenommenes Ruhefeld',
			'there is no such settlement to take back': 'diese Feststellung gibt es nicht',
			'it is too long ago to take back': 'sie liegt zu lange zurück',
			'the bay has changed since': 'der Stellplatz hat sich seitdem geändert'
		}
	},
	sheet: {
		name: (code) => `Platzprotokoll ${code}`,
		heading: (code) => `Protokoll des Stellplatzes ${code}`,
		from: 'Von',
		until: 'Bis',
		show: 'Zeigen',
		print: 'Drucken',
		span: (from, until, zone) => `Von ${from} bis ${until}. Zeiten des Standorts, ${zone}.`,
		cut: 'Nur die ersten 1000 Einträge: Wählen Sie eine kürzere Zeit.',
		saidAndKnown: 'Was gesagt wurde, und was heute bekannt ist',
		saidAt: 'Gesagt am',
		said: 'Was gesagt wurde',
		ofTime: 'Für die Zeit',
		known: 'Heute bekannt',
		takenBack: (time) => `zurückgenommen ${time}: geschah nicht`,
		stands: 'gilt',
		standsLate: (length) => `gilt; spät gefunden, ${length} danach`,
		nothing: 'In dieser Zeit wurde von diesem Stellplatz nichts gesagt.',
		stays: 'Aufenthalte, wie heute bekannt',
		length: 'Dauer',
		goesOn: 'dauert an',
		thenUnknown: '(dann nicht mehr bekannt)',
		noStay: 'Kein Aufenthalt in dieser Zeit.',
		caution:
			'Eine Aufzeichnung der Belegung allein beweist keine Ordnungswidrigkeit. Die Belegung ist eine Schätzung aus einem Magnetfeld; sie sagt nichts darüber, wer oder was hier stand.'
	}
};
export const dossierWords = area(en, de);
