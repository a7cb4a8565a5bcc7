import { area, type Widened } from './index';

/** What is done at one bay, from the plan and from its dossier: ask the node, settle, send someone. */
const en = {
	dossier: 'Dossier',
	ask: 'Ask the node',
	asked: (node: string) => `${node} was asked; its answer comes within seconds when it hears.`,
	doubtful: (reason: string) => `doubtful: ${reason}`,
	settle: 'Settle',
	settleOf: (code: string) => `Settle ${code}`,
	says: (state: string, since: string | null) =>
		`Lodekeep says ${state}${since === null ? '' : ` since ${since}`}. What do you know?`,
	how: 'How do you know?',
	sayHow: 'Say how you know it.',
	way: {
		seen_vacant: 'I see it is free',
		told_vacant: 'I was told it is free',
		seen_occupied: 'I see it is taken'
	},
	does: {
		seen_vacant: 'sets the state, and takes the quiet field around your look for the time being',
		told_vacant: 'asks the node; its quiet field stays as it is',
		seen_occupied: 'starts the stay anew'
	},
	settled: (code: string) => `${code} is settled.`,
	settledNot: (code: string, outcome: string) => `${code}: ${outcome}.`,
	undone: (code: string) => `${code}: settling undone.`,
	settleCaution:
		'After works or new steel, a new reference only with the bay seen empty. Look from the footway and stand still to read the phone.',
	send: 'Send someone',
	sentFor: 'Sent for',
	sendTo: (code: string) => `Send someone to ${code}`,
	isSentFor: (code: string) => `${code} is sent for`,
	sendWhat:
		'Everybody who does maintenance here sees it and gets a mail; who takes it is shown on the plan.',
	sentSince: (time: string, reason: string) => `Since ${time}: ${reason}.`,
	task: 'What is to be done there',
	nobody: 'Nobody has it yet.',
	youHave: (since: string | null) => `You have it${since === null ? '' : ` since ${since}`}.`,
	otherHas: (name: string, since: string | null) =>
		`${name} has it${since === null ? '' : ` since ${since}`}.`,
	toEnd: 'To end it: what was done or found',
	sent: (code: string) => `${code}: asked for somebody.`,
	end: 'End it',
	ended: (code: string) => `${code}: ended.`,
	handBack: 'Hand back',
	handedBack: (code: string) => `${code}: handed back.`,
	take: 'I take it',
	taken: (code: string) => `You have ${code}.`
};
const de: Widened<typeof en> = {
	dossier: 'Akte',
	ask: 'Knoten fragen',
	asked: (node) => `${node} ist gefragt; hört er, so kommt die Antwort binnen Sekunden.`,
	doubtful: (reason) => `zweifelhaft: ${reason}`,
	settle: 'Feststellen',
	settleOf: (code) => `${code} feststellen`,
	says: (state, since) =>
		`Lodekeep sagt ${state}${since === null ? '' : ` seit ${since}`}. Was wissen Sie?`,
	how: 'Woher wissen Sie es?',
	sayHow: 'Sagen Sie, woher Sie es wissen.',
	way: {
		seen_vacant: 'Ich sehe: er ist frei',
		told_vacant: 'Mir wurde gesagt: er ist frei',
		seen_occupied: 'Ich sehe: er ist belegt'
	},
	does: {
		seen_vacant: 'setzt den Zustand und nimmt das Ruhefeld um Ihren Blick vorläufig an',
		told_vacant: 'fragt den Knoten; sein Ruhefeld bleibt, wie es ist',
		seen_occupied: 'lässt den Aufenthalt neu beginnen'
	},
	settled: (code) => `${code} ist festgestellt.`,
	settledNot: (code, outcome) => `${code}: ${outcome}.`,
	undone: (code) => `${code}: Feststellung zurückgenommen.`,
	settleCaution:
		'Nach Arbeiten oder neuem Stahl einen neuen Bezug nur, wenn Sie den Platz leer sehen. Schauen Sie vom Gehweg aus und bleiben Sie stehen, wenn Sie auf das Telefon schauen.',
	send: 'Jemanden rufen',
	sentFor: 'Gerufen',
	sendTo: (code) => `Jemanden zu ${code} rufen`,
	isSentFor: (code) => `Für ${code} ist gerufen`,
	sendWhat:
		'Alle, die hier instand halten, sehen es und bekommen eine E-Mail; wer es übernimmt, steht auf dem Plan.',
	sentSince: (time, reason) => `Seit ${time}: ${reason}.`,
	task: 'Was dort zu tun ist',
	nobody: 'Noch hat es niemand.',
	youHave: (since) => `Sie haben es${since === null ? '' : ` seit ${since}`}.`,
	otherHas: (name, since) => `${name} hat es${since === null ? '' : ` seit ${since}`}.`,
	toEnd: 'Zum Beenden: was getan oder gefunden wurde',
	sent: (code) => `${code}: jemand ist gerufen.`,
	end: 'Beenden',
	ended: (code) => `${code}: beendet.`,
	handBack: 'Zurückgeben',
	handedBack: (code) => `${code}: zurückgegeben.`,
	take: 'Ich übernehme es',
	taken: (code) => `Sie haben ${code}.`
};
export const bayWords = area(en, de);
