import { area, type Widened } from './index';

/** The register of sites. */
const en = {
	noAnswer: (length: string) => `no answer from Lodekeep for ${length}`,
	allLive: (sites: string) => `${sites}, all live`,
	away: (n: number, sites: string) => `${n} of ${sites} late or lost`,
	status: { late: 'late', lost: 'lost', live: 'live' },
	heard: (status: string, ago: string) => `${status}, ${ago}`,
	since: (status: string, time: string) => `${status} since ${time}`,
	site: 'Site',
	bays: 'Bays',
	taken: 'Taken',
	unknown: 'Not known',
	doubtful: 'Doubtful',
	silent: 'Silent',
	refreshDue: 'Film refresh due',
	closed: 'Closed',
	lastHeard: 'Last heard',
	localTime: 'Local time',
	demo: 'demo, simulated',
	none: 'No site yet.',
	noneCure: 'A site is made over the API, or with the demo. The handbook says how.',
	asking: 'asking for the sites …',
	inAll: 'In all',
	sum: (bays: string, sites: string) => `${bays} on ${sites}`,
	demoNever: '; a demo site never counts',
	leaveDemo: 'Take the demo away',
	leaveDemoWhat: (names: string) =>
		`${names}: its site, nodes, people and keys go, and its simulator ends. It does not come back; your own sites stay as they are.`,
	leave: 'Take it away',
	demoGone: 'The demo is gone.'
};
const de: Widened<typeof en> = {
	noAnswer: (length) => `keine Antwort von Lodekeep seit ${length}`,
	allLive: (sites) => `${sites}, alle aktuell`,
	away: (n, sites) => `${n} von ${sites} verspätet oder verloren`,
	status: { late: 'verspätet', lost: 'verloren', live: 'aktuell' },
	heard: (status, ago) => `${status}, ${ago}`,
	since: (status, time) => `${status} seit ${time}`,
	site: 'Standort',
	bays: 'Plätze',
	taken: 'Belegt',
	unknown: 'Nicht bekannt',
	doubtful: 'Zweifelhaft',
	silent: 'Stumm',
	refreshDue: 'Filmauffrischung fällig',
	closed: 'Gesperrt',
	lastHeard: 'Gehört',
	localTime: 'Ortszeit',
	demo: 'Vorführung, simuliert',
	none: 'Noch kein Standort.',
	noneCure: 'Ein Standort entsteht über die API oder mit der Vorführung. Das Handbuch sagt wie.',
	asking: 'die Standorte werden gefragt …',
	inAll: 'Insgesamt',
	sum: (bays, sites) => `${bays} an ${sites}`,
	demoNever: '; ein Standort der Vorführung zählt nie mit',
	leaveDemo: 'Vorführung entfernen',
	leaveDemoWhat: (names) =>
		`${names}: Standort, Knoten, Personen und Schlüssel gehen, und der Simulator endet. Sie kommt nicht wieder; Ihre eigenen Standorte bleiben, wie sie sind.`,
	leave: 'Entfernen',
	demoGone: 'Die Vorführung ist fort.'
};
export const sitesWords = area(en, de);
