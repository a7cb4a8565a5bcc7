import { words } from './index';

/**
 * What detection gives as evidence, in German. It is stored and handed on in English (the API's contract),
 * so it is translated sentence by sentence where it is shown; one without a rule stays as it was said.
 * Sources: detection/evidence.ts and its callers, ingest/bare-bay.ts, ingest/silence.ts.
 */
const MOVED = { rose: 'stieg um', fell: 'fiel um', moved: 'wanderte um' } as const;
const IN_GERMAN: readonly [RegExp, (...parts: string[]) => string][] = [
	[/^disturbance (.+), threshold (.+)$/, (d, limit) => `Störung ${d}, Schwelle ${limit}`],
	[
		/^(rose|fell|moved) (.+ mG) during a gap of (.+?)(:.+| with.+)?$/,
		(verb, mg, gap, rest) => `${moved(verb)} ${mg} in einer Lücke von ${gap}${tail(rest)}`
	],
	[
		/^(rose|fell|moved) (.+ mG) in (\d+ \w+)(:.+| with.+)?$/,
		(verb, mg, span, rest) => `${moved(verb)} ${mg} in ${span}${tail(rest)}`
	],
	[
		/^neighbour (.+) moved (.+) at the same time$/,
		(bay, mg) => `Nachbar ${place(bay)} wanderte zugleich um ${mg}`
	],
	[
		/^neighbour (.+) (quiet|moving)$/,
		(bay, how) => `Nachbar ${place(bay)} ${how === 'quiet' ? 'ruhig' : 'in Bewegung'}`
	],
	[/^seen free by (.+)$/, (by) => `frei gesehen von ${by}`],
	[/^seen taken by (.+)$/, (by) => `belegt gesehen von ${by}`],
	[/^told to be free by (.+)$/, (by) => `frei gesagt von ${by}`],
	[/^not heard for (.+)$/, (span) => `nicht gehört seit ${span}`],
	[
		/^heard again after (.+) not known$/,
		(span) => `wieder gehört, nachdem ${span} nichts bekannt war`
	],
	[
		/^quiet field (.+) from the reference after the closure$/,
		(mg) => `Ruhefeld nach der Sperrung ${mg} vom Bezug`
	],
	[
		/^the reference was learned with a vehicle on the bay(?:; its empty field has come back (\d+) times)?$/,
		(times) =>
			`der Bezug wurde mit einem Fahrzeug auf dem Platz gelernt${times === '' ? '' : `; das leere Feld kam ${times}-mal wieder`}`
	]
];
const WHOLE: Readonly<Record<string, string>> = {
	'its node left the bay': 'sein Knoten kam aus dem Stellplatz',
	'stayed when the queue had moved on': 'blieb, als die Schlange weiterfuhr',
	'the node is not heard': 'der Knoten wird nicht gehört',
	'the node was withdrawn': 'der Knoten wurde ausgebaut',
	'the node was placed anew and finds its quiet field':
		'der Knoten wurde neu eingesetzt und sucht sein Ruhefeld',
	'a magnet or steel overloads the sensor': 'ein Magnet oder Stahl übersteuert den Sensor',
	'the reference is not yet proved': 'der Bezug ist noch nicht bestätigt',
	'quiet field accepted by rule': 'Ruhefeld durch Regel angenommen',
	'seen empty when its quiet field was accepted': 'leer gesehen, als das Ruhefeld angenommen wurde'
};
const moved = (verb: string): string => MOVED[verb as keyof typeof MOVED];
const place = (bay: string): string => bay.replace(/^bay /, '').replace('the neighbour', 'nebenan');

function tail(rest: string): string {
	if (rest.startsWith(':')) return ': kein Magnet, denn das Feld kam von selbst zurück';
	const by = /^ with neighbour (.+), and stayed when that one left$/.exec(rest)?.[1];
	return by === undefined ? '' : ` mit Nachbar ${place(by)} und blieb, als dieser abfuhr`;
}

/** A reason as the API gives it, in the language that speaks. */
export function evidenceWords(said: string): string {
	if (words().locale !== 'de-DE') return said;
	for (const [pattern, write] of IN_GERMAN) {
		const found = pattern.exec(said);
		if (found !== null)
			return write(...found.slice(1).map((part: string | undefined) => part ?? ''));
	}
	return WHOLE[said] ?? said;
}
