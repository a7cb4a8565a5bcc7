import { words } from './messages';

/** What the record keeps in English (reasons, steps, verdicts) as a German reader reads it. */
const PHRASES: Readonly<Record<string, string>> = {
	'the bulk order is paused': 'der Sammelauftrag ist angehalten',
	'the node is out of service': 'der Knoten ist außer Betrieb',
	'the node has never been heard': 'der Knoten war noch nie zu hören',
	'the node is silent': 'der Knoten ist stumm',
	'the cell is under the floor for a pulse': 'die Zelle liegt unter der Grenze für einen Puls',
	'the voltage of the cell is not known': 'die Spannung der Zelle ist nicht bekannt',
	'the node lies in no bay': 'der Knoten liegt an keinem Stellplatz',
	'no node lies there': 'dort liegt kein Knoten',
	'one is open for this node already': 'für diesen Knoten ist schon eine offen',
	'it was not cured twice: somebody has to see the node before another pulse':
		'zweimal nicht behoben: jemand muss den Knoten vor einem weiteren Puls ansehen',
	'the film is flipped': 'der Film ist umgeklappt',
	'a strong field met the film, no pulse since':
		'ein starkes Feld traf den Film, seither kein Puls',
	'unexplained drift, no pulse since it began': 'nicht erklärte Drift, seither kein Puls',
	'at any hour': 'zu jeder Stunde',
	'in quiet hours': 'in ruhigen Stunden',
	'waits for its chance': 'wartet auf die Gelegenheit',
	'every guard lets it pass': 'nichts steht dagegen',
	'the same command once more, for the boot of now':
		'derselbe Befehl noch einmal, für den jetzigen Start',
	obeyed: 'befolgt',
	'obeyed; its answer came late': 'befolgt; die Antwort kam spät',
	'the node started anew before it answered': 'der Knoten startete neu, bevor er antwortete',
	'no answer came in time': 'es kam nicht rechtzeitig Antwort',
	'nobody approved it in 14 days': 'niemand genehmigte sie in 14 Tagen',
	'it could not be carried out in 14 days': 'sie ließ sich in 14 Tagen nicht ausführen',
	'the pulse was fired, but the bay was never quiet for long enough to prove it':
		'der Puls kam, doch der Stellplatz war nie lange genug ruhig für den Nachweis',
	'obeyed, but its figures never came: nothing is proved':
		'befolgt, doch die Werte kamen nie: nichts ist nachgewiesen',
	'the node had the command already and obeyed it all the same':
		'der Knoten hatte den Befehl schon und folgte ihm trotzdem',
	'the bay is not empty: still readings are counted anew once it is':
		'der Stellplatz ist nicht leer: gezählt wird neu, sobald er es ist',
	'the bay is empty: still readings are counted':
		'der Stellplatz ist leer: ruhige Messungen werden gezählt',
	'the bulk order was called off': 'der Sammelauftrag wurde abgesagt',
	'pair by rule: the offset is looked after': 'Pulspaar nach Regel: der Offset wird gepflegt',
	'pair by rule: what does the drift come from?': 'Pulspaar nach Regel: woher kommt die Drift?',
	'pair at learning: the first offset': 'Pulspaar beim Lernen: der erste Offset',
	'its offset is in use': 'sein Offset gilt',
	'no reading after the last pulse came with the pair':
		'mit dem Pulspaar kam keine Messung nach dem letzten Puls',
	'the noise after is not known': 'das Rauschen danach ist nicht bekannt',
	'what the film had lost is not known: no reading before the pulse came':
		'der Verlust des Films ist nicht bekannt: es kam keine Messung vor dem Puls',
	'a rule': 'eine Regel',
	'the node': 'der Knoten',
	somebody: 'jemand'
};

const N = '([\\d.]+)';
const comma = (text: string): string => text.replace('.', ',');
type Said = (...parts: string[]) => string;

/** Sentences with values; what stands in one is read by the same rules. */
const SENTENCES: readonly (readonly [RegExp, Said])[] = [
	[/^by schedule: (.*)$/, (why = '') => `nach Zeitplan: ${list(why)}`],
	[/^proved: (.*)$/, (what = '') => `nachgewiesen: ${german(what)}`],
	[/^not cured: (.*)$/, (what = '') => `nicht behoben: ${list(what)}`],
	[/^the pulse failed: (.*)$/, (why = '') => `der Puls misslang: ${german(why)}`],
	[/^the node refused: (.*)$/, (why = '') => `der Knoten lehnte ab: ${german(why)}`],
	[/^failed (\d+) times: (.*)$/, (n = '', why = '') => `${n}-mal misslungen: ${german(why)}`],
	[/^(\d+) still readings after the pulse$/, (n = '') => `${n} ruhige Messungen nach dem Puls`],
	[
		/^(\d+) pulses told nothing: their figures never came$/,
		(n = '') => `${n} Pulse sagten nichts: ihre Werte kamen nie`
	],
	[
		/^(\d+) still readings of at least (\d+)$/,
		(n = '', least = '') => `${n} ruhige Messungen von mindestens ${least}`
	],
	[
		new RegExp(`^the film had lost ${N} mG \\(${N} %\\)$`),
		(mg = '', share = '') => `der Film hatte ${comma(mg)} mG (${comma(share)} %) verloren`
	],
	[
		new RegExp(`^the film was flipped \\(${N} mG\\)$`),
		(mg = '') => `der Film war umgeklappt (${comma(mg)} mG)`
	],
	[
		new RegExp(`^film cured, gain or surroundings changed \\(${N} % off the reference\\): (.*)$`),
		(share = '', loss = '') =>
			`Film behoben, Empfindlichkeit oder Umgebung verändert (${comma(share)} % neben dem Bezug): ${german(loss)}`
	],
	[
		new RegExp(`^unexplained drift ${N} mG, (under|not under) the drifting limit of ${N} mG$`),
		(mg = '', is = '', limit = '') =>
			`nicht erklärte Drift ${comma(mg)} mG, ${is === 'under' ? 'unter' : 'nicht unter'} der Grenze von ${comma(limit)} mG`
	],
	[
		new RegExp(`^the reading after lies ${N} mG from the SET reading, (within|over) ${N} mG$`),
		(mg = '', is = '', limit = '') =>
			`die Messung danach liegt ${comma(mg)} mG neben der SET-Messung, ${is === 'within' ? 'innerhalb von' : 'über'} ${comma(limit)} mG`
	],
	[
		new RegExp(`^noise ${N} mG before, ${N} mG after$`),
		(before = '', after = '') => `Rauschen vorher ${comma(before)} mG, nachher ${comma(after)} mG`
	],
	[
		new RegExp(`^noise ${N} mG; before not known, nothing to hold it to$`),
		(mg = '') => `Rauschen ${comma(mg)} mG; vorher nicht bekannt, kein Vergleich`
	],
	[/^its offset is not in use: (.*)$/, (why = '') => `sein Offset gilt nicht: ${german(why)}`],
	[/^mostly (.*)$/, (when = '') => `meist ${weekdays(when)}`]
];

const DAYS: Readonly<Record<string, string>> = {
	...{ Mon: 'Mo', Tue: 'Di', Wed: 'Mi', Thu: 'Do', Fri: 'Fr', Sat: 'Sa', Sun: 'So' },
	...{ 'every day': 'täglich', 'all day': 'ganztags' }
};
const weekdays = (text: string): string =>
	text.replaceAll(/Mon|Tue|Wed|Thu|Fri|Sat|Sun|every day|all day/g, (day) => DAYS[day] ?? day);

const list = (text: string): string => text.split('; ').map(german).join('; ');

function german(text: string): string {
	const known = Object.hasOwn(PHRASES, text) ? PHRASES[text] : undefined;
	if (known !== undefined) return known;
	for (const [pattern, say] of SENTENCES) {
		const found = pattern.exec(text);
		if (found !== null) return say(...found.slice(1));
	}
	return text;
}

/** A reason, step or verdict of a film refresh in the language that speaks; people's own words stay. */
export const refreshPhrase = (text: string): string =>
	words().locale === 'de-DE' ? german(text) : text;
