import { area, type Widened } from './index';

/** The list of a site's nodes. */
const en = {
	heading: (site: string) => `Nodes of ${site}`,
	noAnswer: (length: string) => `no answer for ${length}`,
	node: 'Node',
	bay: 'Bay',
	noBay: 'none',
	condition: 'Condition',
	also: 'Also',
	heard: 'Heard',
	firmware: 'Firmware',
	profile: 'Profile',
	gateway: 'Gateway',
	asking: 'asking for the nodes …',
	none: 'No node yet.',
	noneCure: 'Nodes are registered and placed over the API.',
	note: 'Most serious first. Open a bay for its node’s field, offset and reference.'
};
const de: Widened<typeof en> = {
	heading: (site) => `Knoten von ${site}`,
	noAnswer: (length) => `keine Antwort seit ${length}`,
	node: 'Knoten',
	bay: 'Platz',
	noBay: 'keiner',
	condition: 'Befund',
	also: 'Dazu',
	heard: 'Gehört',
	firmware: 'Firmware',
	profile: 'Profil',
	gateway: 'Gateway',
	asking: 'die Knoten werden gefragt …',
	none: 'Noch kein Knoten.',
	noneCure: 'Knoten werden über die API angemeldet und eingesetzt.',
	note: 'Das Ernsteste zuerst. Öffnen Sie einen Stellplatz für Feld, Offset und Bezug seines Knotens.'
};
export const nodesWords = area(en, de);
