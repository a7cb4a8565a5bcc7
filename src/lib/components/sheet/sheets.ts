/** The index of sheets: numbers, names, where they are and who may open them. */
export type SheetRole = 'operator' | 'maintenance' | 'integrator' | 'admin';

export interface Sheet {
	number: string;
	name: string;
	/** `g` then this letter opens it. */
	letter: string;
	/** Path; sheets of a site need its slug. */
	path: (site: string) => string;
	ofSite: boolean;
	roles: readonly SheetRole[];
	/** Stands in the bottom bar of a phone. */
	thumb?: boolean;
}

const ALL: readonly SheetRole[] = ['operator', 'maintenance', 'integrator', 'admin'];

export const SHEETS: readonly Sheet[] = [
	{
		number: '1',
		name: 'Sites',
		letter: 's',
		path: () => '/sites',
		ofSite: false,
		roles: ALL,
		thumb: true
	},
	{
		number: '2',
		name: 'Plan',
		letter: 'p',
		path: (site) => `/sites/${site}/plan`,
		ofSite: true,
		roles: ALL,
		thumb: true
	},
	{
		number: '3',
		name: 'Nodes',
		letter: 'n',
		path: (site) => `/sites/${site}/nodes`,
		ofSite: true,
		roles: ALL
	},
	{
		number: '4',
		name: 'Closures',
		letter: 'c',
		path: (site) => `/sites/${site}/closures`,
		ofSite: true,
		roles: ['operator', 'maintenance', 'admin']
	},
	{
		number: '5',
		name: 'Visits',
		letter: 'v',
		path: (site) => `/sites/${site}/visits`,
		ofSite: true,
		roles: ['operator', 'maintenance', 'admin']
	},
	{
		number: '6',
		name: 'Drift',
		letter: 'd',
		path: (site) => `/sites/${site}/drift`,
		ofSite: true,
		roles: ALL
	},
	{
		number: '7',
		name: 'Film refreshes',
		letter: 'f',
		path: (site) => `/sites/${site}/refreshes`,
		ofSite: true,
		roles: ['operator', 'maintenance', 'admin']
	},
	{
		number: '13',
		name: 'Notices',
		letter: 't',
		path: (site) => `/sites/${site}/notices`,
		ofSite: true,
		roles: ['operator', 'maintenance', 'admin']
	},
	{
		number: '16',
		name: 'All notices',
		letter: 'l',
		path: () => '/notices',
		ofSite: false,
		roles: ['operator', 'maintenance', 'admin']
	},
	{
		number: '8',
		name: 'Connections',
		letter: 'k',
		path: () => '/connections',
		ofSite: false,
		roles: ['integrator', 'admin']
	},
	{
		number: '9',
		name: 'People',
		letter: 'e',
		path: () => '/people',
		ofSite: false,
		roles: ['admin']
	},
	{
		number: '15',
		name: 'Wall links',
		letter: 'w',
		path: () => '/walls',
		ofSite: false,
		roles: ['operator', 'maintenance', 'admin']
	},
	{ number: '10', name: 'Mail', letter: 'm', path: () => '/mail', ofSite: false, roles: ['admin'] },
	{
		number: '11',
		name: 'Parameters',
		letter: 'a',
		path: (site) => `/sites/${site}/parameters`,
		ofSite: true,
		roles: ALL
	},
	{
		number: '12',
		name: 'How decided',
		letter: 'h',
		path: (site) => `/sites/${site}/how`,
		ofSite: true,
		roles: ALL
	}
];

/** Sheets a role may open, by number; those of a site only when there is one to show. */
export const sheetsFor = (role: string, site: string | null): Sheet[] =>
	SHEETS.filter(
		(sheet) => (sheet.roles as readonly string[]).includes(role) && (!sheet.ofSite || site !== null)
	).sort((a, b) => Number(a.number) - Number(b.number));

/** Where a person lands after signing in (product.md, 'The people'). */
export function firstScreen(role: string, sites: readonly string[]): string {
	if (role === 'admin') return '/sites';
	if (role === 'integrator') return '/connections';
	const site = sites[0];
	if (site === undefined) return '/sites';
	if (role === 'maintenance') return sites.length === 1 ? `/sites/${site}/drift` : '/sites';
	return sites.length === 1 ? `/sites/${site}/plan` : '/sites';
}
