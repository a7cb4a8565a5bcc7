import type { Chapter } from './rules';

/** rules.ts in German: the same chapters, rules, sentences and settings (held by rules.test.ts). */
export const CHAPTERS_DE: readonly Chapter[] = [
	{
		title: 'Von Zählwerten zu einem Feld',
		lead: 'Ein Sensor im Boden gibt Zählwerte. Zwischen ihnen und dem Feld stehen seine Skala, die Richtung, in der sein Film zuletzt magnetisiert wurde, ein eigener Offset, der oft größer als ein Fahrzeug ist, und die Temperatur.',
		rules: [
			{
				title: 'Skala',
				text: () => [
					'Wie viele Zählwerte ein Gauß ergeben, steht im Profil des Sensors, nicht im Programm: Zwei Lesarten desselben Datenblatts unterscheiden sich um 2,4 %.',
					'Eine Messung am Ende des Bereichs ist übersteuert. Etwas überlastet den Sensor, und bis das endet, sagt er nichts von seinem Stellplatz.'
				]
			},
			{
				title: 'Pulse und Paare',
				text: () => [
					'Ein Puls magnetisiert den Film neu. Ein Paar von Pulsen, einer in jede Richtung, misst den eigenen Offset des Sensors: Die halbe Summe beider Messungen ist Offset, die halbe Differenz ist Feld.',
					'Ein Puls heilt den Film, bevor er gemessen wird. Was der Film verloren hatte, zeigt nur das Feld davor abzüglich des Felds danach.',
					'Bis ein erstes Paar angenommen ist, ist keine Richtung bekannt: Die Regeln zu umgeklapptem Film, Verstärkung, Kippung, geomagnetischer Änderung und Erdfeld sind aus und sagen das.'
				]
			},
			{
				title: 'Die Erde als Prüfung',
				text: () => [
					'Wird ein Ruhefeld gelernt, so wird seine Stärke mit dem World Magnetic Model an Ort und Tag verglichen. Stahl im Boden beugt es: 35 % daneben sind eine Warnung, hinzusehen, keine Ablehnung.',
					'Ein Verhältnis nahe 4 oder 1/4 heißt, dass das Profil der falschen Auflösung gewählt wurde.'
				]
			}
		]
	},
	{
		title: 'Wann ein Stellplatz belegt oder frei ist',
		lead: 'Ein Fahrzeug kommt in Sekunden und steht dann still; alles andere, was das Feld so weit bewegt, braucht Stunden, kommt sofort zurück oder bewegt einen Nachbarn mehr. Darum werden Schritte zwischen stillen Pegeln beurteilt, nicht Pegel allein.',
		rules: [
			{
				title: 'Das Ruhefeld',
				text: (say) => [
					`Ein neuer Knoten lernt es aus mindestens ${say('learnReadings')} über ${say('learnS')} mit höchstens ${say('learnSigmaMg')} Rauschen. Ein stehendes Fahrzeug besteht diese Prüfung auch, darum sagt eine Person, dass sie den Platz leer sieht; ohne das ist es vorläufig, bis das Feld gegangen und bis auf ${say('returnMg')} wiedergekommen ist: ${say('returnsToProve')}.`,
					`Solange der Platz frei und still ist, folgt das Ruhefeld langsamer Änderung binnen etwa ${say('baselineTauS')}. Solange er belegt ist, lernt es nichts, folgt aber der Temperatur und der geomagnetischen Änderung des Standorts.`
				]
			},
			{
				title: 'Belegt',
				text: (say) => [
					`Die Störung ist der Abstand des Felds vom Ruhefeld. Sie muss ${say('onMg')} erreichen, oder ${say('onSigma')} des eigenen Rauschens, wenn das mehr ist, und ${say('stillS')} lang innerhalb von ${say('stillMg')} still stehen.`,
					`Mindestens ${say('stepRatio')} der Schwelle müssen auf einmal gekommen sein. Was darüberkriecht, macht den Platz zweifelhaft, nicht belegt. Pulse, die nicht stehen bleiben, sind vorbeifahrender Verkehr.`
				],
				example: 'taken'
			},
			{
				title: 'Wieder frei',
				text: (say) => [
					`Eine Abfahrt hebt ihre Ankunft bis auf ${say('undoRatio')} davon auf, oder die Störung fällt unter ${say('offRatio')} der Schwelle, oder unter ${say('releaseRatio')} dessen, was in diesem Aufenthalt dort stand.`
				]
			},
			{
				title: 'Lücken und Stille',
				text: (say) => [
					`Nach mehr als ${say('gapMinS')} oder ${say('gapPeriods')} ohne Messung ist nicht bekannt, wie das Feld wanderte: Die Änderung muss dann mehr sein, als Temperatur und geomagnetische Änderung erklären, und die Gründe sagen ‚in einer Lücke‘.`,
					'Ein Knoten, der drei seiner Perioden lang nicht gehört wird, ist stumm; nach der Schonzeit des Standorts ist sein Stellplatz nicht bekannt, mit dem, was er zuletzt war.'
				]
			},
			{
				title: 'Nachbarn',
				text: (say) => [
					`Ein Fahrzeug ist bis zum nächsten Stellplatz zu spüren. Gleichzeitige Schritte innerhalb von ${say('neighbourM')} werden verglichen: Einer unter ${say('echoRatio')} des größeren ist dessen Echo und bewegt keinen Zustand. Bleibt er, wenn der größere geht, so war er ein Fahrzeug und wird zu seiner eigenen Zeit eingetragen.`,
					`Schwache Schritte, die binnen ${say('queueS')} entlang einer Reihe zusammenkommen, sind eine Schlange in der Gasse; was ${say('queueMaxS')} überdauert, ist geparkt.`
				]
			},
			{
				title: 'Zweifel',
				text: (say) => [
					'Ein Zweifel heißt: Verlassen Sie sich nicht auf diesen Stellplatz, und warum. Er kommt von einer Überfahrt ohne Schritt, einem Magneten, einem umgeklappten Film, dem Ende von Arbeiten, einem Bezug, der ein Fahrzeug enthalten kann, oder einem zu langen Aufenthalt.',
					`Ein Aufenthalt über ${say('longStayH')}, oder über dem ${say('longStayFactor')}-Fachen des Üblichen am Platz, wird mit seiner Ankunft verglichen: dieselbe Größe bis auf ${say('longSizeRatio')} und dieselbe Richtung bis auf ${say('longAngleDeg')} ist ein langer Aufenthalt, alles andere ein Zweifel.`
				],
				example: 'doubtful'
			},
			{
				title: 'Wie sicher',
				text: () => [
					'Sicher, ziemlich sicher und unsicher kommen daher, wie oft Zustände mit denselben Gründen an Standorten stimmten, deren Wahrheit bekannt ist. Die Zahl steht in der Akte.'
				]
			}
		]
	},
	{
		title: 'Was das Ruhefeld bewegt',
		lead: 'Das Feld eines leeren Stellplatzes wandert ohne jedes Fahrzeug um einige zehn Milligauß. Nur einen verlorenen Film heilt ein Puls, darum wird die Bewegung jeder Stunde seit dem Bezug nach Ursachen zerlegt.',
		rules: [
			{
				title: 'Temperatur',
				text: (say) => [
					`Der Gang wird am Knoten selbst gelernt, aus Tripeln von Stunden, in denen sich die Temperatur um mindestens ${say('tripleDenominatorC')} bog; weniger als ${say('minTriples')} Tripel geben keinen, nie eine Vermutung.`
				]
			},
			{
				title: 'Geomagnetisches Wetter',
				text: (say) => [
					`Was mindestens ${say('lineNodes')} Knoten gleich sahen, jeder entlang seines eigenen waagrechten Felds, ist die Linie des Standorts. Wo sie um mehr als ${say('lineSpreadMg')} uneinig sind, oder sie über ${say('lineLimitMg')} liegt, wird nichts abgezogen: ‚Änderung am ganzen Standort, Ursache nicht bekannt‘.`
				]
			},
			{
				title: 'Brücke, Umgebung, Film',
				text: (say) => [
					'Ein Paar trennt sie: Der Offset, der wanderte, ist die Brücke; das Feld, das um einen geheilten Film wanderte, ist die Umgebung; was der Puls zurückgab, ist Film.',
					`Schwächer in derselben Richtung, bis auf ${say('gainAngleDeg')}, ist ‚Verstärkung oder Feld‘; gedreht bei gleicher Stärke, bis auf ${say('tiltMagnitudeMg')}, ist ‚mit einer Kippung verträglich‘; der Rest ist ‚Stahl oder Arbeiten‘.`
				]
			},
			{
				title: 'Unerklärt, und driftend',
				text: (say) => [
					`Was bleibt, ist unerklärt. Eine Grenze gilt erst als überschritten, wenn der Wert abzüglich zweier Standardfehler sie überschreitet. ${say('driftingMg')} während ${say('driftingHours')} in Folge heißt driftend: Die Zustände stimmen noch. Eine langsame Summe von Tagesmedianen (CUSUM) findet, was nie springt.`,
					'Die Tage bis zur Grenze sind eine Spanne aus den Grenzen der Rate; eine Bewegung, die der Zufall erklärt, ist kein Trend.'
				],
				example: 'drifting'
			},
			{
				title: 'Wann eine Filmauffrischung fällig ist',
				text: (say) => [
					`Nach einer Übersteuerung ohne Puls seitdem, bei umgeklapptem Film, oder bei ${say('refreshMg')} unerklärt während ${say('refreshHours')} und keinem Puls, seit es begann. Ein Offset oder eine Verstärkung, die wanderte, ist kein Grund: Kein Puls heilt sie.`,
					`Ein Offset, der binnen ${say('visitOffsetDays')} zweimal um ${say('visitOffsetMg')} springt, oder eine Verstärkung, die nach einem Puls um ${say('visitGain')} daneben ist, heißt einen Einsatz.`
				]
			}
		]
	},
	{
		title: 'Wo es falsch liegen kann',
		lead: 'Bekannte Schwächen, damit sie niemand selbst finden muss.',
		rules: [
			{
				title: 'Erkennung',
				text: (say) => [
					'Ein Fahrzeug, dessen Feld am Knoten dem des leeren Platzes gleicht, wird nicht gesehen. Ein Fahrzeug, das viel kleiner ist als eines, das im selben Augenblick nebenan kommt, gilt als dessen Echo, bis dieses geht.',
					`Ein vorläufiger Bezug kann falsch sein, bis er bestätigt ist: ${say('returnsToProve')}.`
				]
			},
			{
				title: 'Drift',
				text: () => [
					'Stahl, der zufällig die Stärke des Felds erhält, sieht aus wie eine Kippung, und Stahl gegen das Feld wie Verstärkung: Die Worte sind vorsichtig. Ein Knoten, der nie allein in einem leeren Stellplatz ist, sagt nichts von seiner Umgebung.'
				]
			},
			{
				title: 'Wofür es nicht da ist',
				text: () => [
					'Dies ist keine Sicherheitseinrichtung: nie das einzige Mittel, das eine Schranke, einen Poller oder ein Tor am Bewegen hindert. Eine Aufzeichnung der Belegung allein beweist keine Ordnungswidrigkeit.'
				]
			}
		]
	}
];
