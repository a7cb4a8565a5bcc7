import { area, type Widened } from './index';

/** The sheet that says how states and drift are decided; its rules stand beside the route. */
const en = {
	heading: (site: string) => `How this is decided at ${site}`,
	lead: 'In plain words, with the thresholds in force here and, where there are any, bays of this site as they stand now. A state is always given with its reasons; nothing here is a guess dressed as a measurement.',
	noneTaken: 'No bay is taken beyond doubt just now.',
	noneTakenMore: 'When one is, it is shown here with its reasons and its plot.',
	noneDoubtful: 'No bay is doubtful just now.',
	noneDoubtfulMore: 'Nothing to do here.',
	needsRefresh: (cause: string, next: string) => `needs a film refresh: ${cause}. Next: ${next}.`,
	isDrifting: (cause: string, next: string) => `is drifting: ${cause}. Next: ${next}.`,
	noneDrifting: 'No node drifts past its limit just now.',
	noneDriftingMore: ['The', 'drift board', 'shows how far each has gone.'],
	different: 'Set differently here',
	allDefault: 'Every setting stands at its default.',
	standard: (value: string) => `default ${value}`,
	parameters: 'Parameters',
	parametersList:
		'lists every threshold with its range, its reason and who changed it. Single nodes may differ: their dossiers say so.',
	sigma: (n: string) => `${n} sigma`,
	asking: 'asking for it …',
	isNow: (state: string, since: string | null) =>
		`is ${state}${since === null ? '' : ` since ${since}`}`,
	doubtful: (time: string, reason: string) => `; doubtful since ${time}: ${reason}`,
	because: (reasons: string) => `Because ${reasons}.`,
	noReason: 'Because nothing is kept of it.',
	against: (reasons: string) => `Against: ${reasons}.`,
	noAgainst: 'Nothing speaks against it.',
	askingReadings: 'asking for its readings …',
	noReadings: 'No readings of that time are kept, or it has no baseline.',
	disturbance: (bay: string) => `Disturbance of ${bay}`,
	disturbanceUnit: 'mG from its quiet field',
	on: (field: string) => `on ${field}`,
	off: (field: string) => `off ${field}`
};
const de: Widened<typeof en> = {
	heading: (site) => `Wie an ${site} entschieden wird`,
	lead: 'In einfachen Worten, mit den Schwellen, die hier gelten, und, wo es welche gibt, mit Stellplätzen dieses Standorts, wie sie jetzt stehen. Ein Zustand kommt immer mit seinen Gründen; nichts hier ist eine Vermutung im Kleid einer Messung.',
	noneTaken: 'Gerade ist kein Stellplatz zweifelsfrei belegt.',
	noneTakenMore: 'Ist einer belegt, so steht er hier mit seinen Gründen und seiner Kurve.',
	noneDoubtful: 'Gerade ist kein Stellplatz zweifelhaft.',
	noneDoubtfulMore: 'Hier ist nichts zu tun.',
	needsRefresh: (cause, next) => `braucht eine Filmauffrischung: ${cause}. Nächstes: ${next}.`,
	isDrifting: (cause, next) => `driftet: ${cause}. Nächstes: ${next}.`,
	noneDrifting: 'Gerade driftet kein Knoten über seine Grenze.',
	noneDriftingMore: ['Die', 'Drifttafel', 'zeigt, wie weit jeder gewandert ist.'],
	different: 'Hier anders gesetzt',
	allDefault: 'Jede Einstellung steht auf der Vorgabe.',
	standard: (value) => `Vorgabe ${value}`,
	parameters: 'Parameter',
	parametersList:
		'führt jede Schwelle auf, mit Bereich, Grund und wer sie änderte. Einzelne Knoten können abweichen: ihre Akten sagen es.',
	sigma: (n) => `${n} Sigma`,
	asking: 'er wird gefragt …',
	isNow: (state, since) => `ist ${state}${since === null ? '' : ` seit ${since}`}`,
	doubtful: (time, reason) => `; zweifelhaft seit ${time}: ${reason}`,
	because: (reasons) => `Dafür: ${reasons}.`,
	noReason: 'Von den Gründen ist nichts aufbewahrt.',
	against: (reasons) => `Dagegen: ${reasons}.`,
	noAgainst: 'Nichts spricht dagegen.',
	askingReadings: 'seine Messungen werden gefragt …',
	noReadings: 'Aus dieser Zeit sind keine Messungen da, oder es fehlt die Grundlinie.',
	disturbance: (bay) => `Störung von ${bay}`,
	disturbanceUnit: 'mG von seinem Ruhefeld',
	on: (field) => `ein ${field}`,
	off: (field) => `aus ${field}`
};
export const howWords = area(en, de);
