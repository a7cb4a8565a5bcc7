/**
 * All visible text of the shell in one place, English as shipped. A value is a sentence or a function that
 * makes one; $lib/format/messages says which language speaks. What is named after the API's values
 * (states, conditions …) is found by them.
 */
export const en = {
	locale: 'en-GB',
	state: { occupied: 'taken', vacant: 'free', unknown: 'not known' },
	condition: {
		withdrawn: 'withdrawn',
		unplaced: 'no node',
		learning: 'learning',
		silent: 'silent',
		inverted: 'inverted',
		clipped: 'clipped',
		refresh_due: 'film refresh due',
		drifting: 'drifting',
		in_service: 'in service'
	},
	conditionSentence: {
		withdrawn: 'taken out of service',
		unplaced: 'no node placed here',
		learning: 'finding its quiet field',
		silent: 'not heard',
		inverted: 'film flipped; state still right',
		clipped: 'a magnet or steel overloads it; not known until it ends',
		refresh_due: 'the film needs a pulse',
		drifting: 'the quiet field is moving; states still good',
		in_service: 'heard and believed'
	},
	silentSince: (time: string) => `not heard since ${time}`,
	mark: {
		clock_off: 'clock off: its times are shifted to arrival',
		unsigned: 'unsigned messages allowed',
		low_cell: 'low cell',
		fast_reporting: 'reporting fast',
		provisional: 'reference provisional'
	},
	confidence: { sure: 'sure', fairlySure: 'fairly sure', unsure: 'unsure' },
	event: {
		arrival: 'a vehicle came',
		departure: 'the vehicle left',
		unknown: 'no longer known',
		known: 'believed again',
		settled: 'settled by a person',
		voided: 'an earlier event taken back'
	},
	role: {
		operator: 'operator',
		maintenance: 'maintenance',
		integrator: 'integrator',
		admin: 'admin'
	},
	/** Reasons of a doubt, as the API names them. */
	doubt: {
		slow_crossing: 'slow crossing',
		magnet: 'magnet',
		'after works': 'after works',
		'told free, not seen': 'told free, not seen',
		'field moved during a gap': 'field moved during a gap',
		'reference may hold a vehicle': 'reference may hold a vehicle',
		'long stay, field no longer as after the arrival':
			'long stay, field no longer as after the arrival',
		'the field jumped at a pulse without before and after':
			'the field jumped at a pulse without before and after'
	},
	/** Singular and plural of what is counted. */
	noun: {
		bay: ['bay', 'bays'],
		site: ['site', 'sites'],
		vehicle: ['vehicle', 'vehicles'],
		doubt: ['doubt', 'doubts'],
		node: ['node', 'nodes'],
		person: ['person', 'people']
	},
	duration: {
		second: 's',
		minute: 'min',
		hour: 'h',
		day: 'd',
		ago: (length: string) => `${length} ago`,
		justNow: 'just now',
		never: 'never'
	},
	notMeasured: 'not measured',
	/** Between whole and tenths of a number. */
	decimalSign: '.',
	/** Between figures of a list. */
	listSign: ', ',
	live: {
		signedOut: 'signed out: what is shown stands still',
		noAnswer: (time: string, length: string) => `no answer from Lodekeep since ${time} (${length})`,
		asking: 'asking …',
		live: (heard: string) => `live, ${heard}`,
		late: (time: string, length: string, heard: string) =>
			`late since ${time} (${length}), ${heard}`,
		lost: (time: string, length: string, heard: string) =>
			`lost since ${time} (${length}), ${heard}`,
		heard: (heard: number, expected: number) => `${heard} of ${expected} nodes heard`
	},
	/** Names of sheets as the index and the title block write them. */
	sheet: {
		Sites: 'Sites',
		Plan: 'Plan',
		Nodes: 'Nodes',
		Closures: 'Closures',
		Visits: 'Visits',
		Drift: 'Drift',
		'Film refreshes': 'Film refreshes',
		Connections: 'Connections',
		People: 'People',
		Mail: 'Mail',
		'Mail settings': 'Mail settings',
		'All notices': 'All notices',
		Parameters: 'Parameters',
		'How decided': 'How decided',
		Notices: 'Notices',
		'Wall links': 'Wall links',
		'My desk': 'My desk',
		'Sites register': 'Sites register'
	},
	frame: {
		ofAllSites: 'Sheets of all sites',
		ofThisSite: 'Sheets of this site',
		skip: 'Skip to the sheet',
		sheets: 'Sheets',
		main: 'Main',
		corner: 'Notes and title block',
		find: 'Find',
		index: 'Index',
		indexOfSheets: 'Index of sheets',
		myDesk: 'My desk',
		sheetNumbers: 'Sheet numbers',
		keys: 'Keys',
		keysRest: 'Single keys rest in fields and on the plan.',
		then: 'then',
		thisList: 'this list',
		onThePlan: 'On the plan',
		singleKeys: 'Single-key shortcuts'
	},
	titleBlock: {
		name: 'Title block',
		site: 'Site',
		sheet: 'Sheet',
		shows: 'Shows',
		asOf: 'As of',
		notYet: 'not yet',
		allSites: 'All sites',
		nobody: 'nobody signed in',
		demo: 'Demo: simulated'
	},
	signIn: {
		title: 'Sign in',
		left: 'You are signed out. Nothing of yours stays here.',
		email: 'E-mail',
		password: 'Password',
		forgotten: 'Password forgotten',
		over: 'You are signed out',
		overWhy: (person: string) =>
			`${person}, your session is over. Sign in here; what you have typed stays.`,
		failed: 'That did not work.',
		noAnswer: 'Lodekeep does not answer.',
		emailMissing: 'Your e-mail address is missing.',
		passwordMissing: 'Your password is missing.',
		wrong: 'This address and password do not belong together.',
		throttled: (length: string) => `Too many attempts. Try again in ${length}.`
	},
	planKeys: {
		arrows: 'nearest bay that way',
		ends: 'along the row',
		pages: 'by zone',
		needs: 'bays that need a person',
		letters: 'to a code',
		space: 'pick',
		enter: 'open the dossier',
		escape: 'return',
		zoom: 'nearer, farther, whole site',
		drift: 'arrows of drift: past the limit, all, none'
	},
	planKeyNames: {
		arrows: 'arrows',
		ends: 'Home, End',
		pages: 'Page keys',
		needs: ', and .',
		letters: 'letters, digits',
		space: 'Space',
		enter: 'Enter',
		escape: 'Escape',
		zoom: '+ − 0',
		drift: '*'
	},
	plan: {
		of: (site: string) => `Plan of ${site}`,
		ofBays: (site: string, bays: string) => `Plan of ${site}, ${bays}`,
		tableOf: (site: string) => `${site}, table of bays`,
		spokenKeys:
			'Arrow keys go to the nearest bay, Home and End along the row, Page keys by zone, full stop and comma to the bays that need a person, letters and digits to a code, Space picks, Enter opens, Escape returns, plus, minus and 0 change the size',
		spokenArrows: ', the asterisk changes which arrows of drift are drawn',
		row: (number: number) => `row ${number}`,
		ofRow: (at: number, of: number) => `${at} of ${of}`,
		was: (state: string, time: string) => `was ${state} ${time}`,
		since: (state: string, time: string, length: string) => `${state} since ${time} (${length})`,
		closedUntil: (time: string, reason: string) => `closed until ${time}: ${reason}`,
		closed: 'closed',
		withdrawn: 'withdrawn',
		doubtful: 'doubtful',
		doubtfulFor: (reason: string) => `doubtful: ${reason}`,
		needsPerson: 'needs a person',
		inHand: 'in hand',
		legend: 'Legend',
		zone: 'Zone',
		all: 'all',
		show: 'Show',
		everything: 'everything',
		shownOf: (shown: number, total: number) => `${shown} of ${total}`,
		size: 'Size',
		farther: '− Farther',
		nearer: '+ Nearer',
		whole: 'Whole site',
		hatching: 'Hatching',
		plainTone: 'Plain tone',
		drawing: 'Drawing',
		table: 'Table',
		closeBays: 'Close bays',
		nearMe: 'Nearest to me',
		needTitle: 'Needs a person',
		needNothing: 'nothing; every bay is believed or in hand',
		sentFor: (reason: string) => `sent for: ${reason}`,
		has: (initials: string) => `${initials} has it`,
		more: (n: number) => `and ${n} more`,
		count: 'Count',
		sum: (taken: number, free: number, unknown: number) =>
			`${taken} taken, ${free} free, ${unknown} not known`,
		asking: 'asking for the bays …',
		changed: (sum: string) => `In the last half minute: ${sum}.`,
		sinceTitle: (time: string) => `Since you were last here, ${time}`,
		sinceName: 'Since you were last here',
		came: (vehicles: string, left: number) => `${vehicles} came, ${left} left`,
		becameDoubtful: (reason: string) => `became doubtful: ${reason}`,
		moreDoubtful: (n: number) => `and ${n} more doubtful`,
		noLongerKnown: (bays: string, codes: string) => `${bays} no longer known: ${codes}`,
		noDoubt: 'no new doubt',
		noBay: 'This site has no bay yet.',
		notDrawn: (n: number) =>
			n === 1
				? 'One bay, and no outline of it is entered.'
				: `${n} bays, and no outline of them is entered.`,
		notDrawnCure: 'They are in the table; outlines come as GeoJSON through the API.',
		alsoNotDrawn: (n: number) =>
			n === 1
				? 'One bay without an outline stands only in the table.'
				: `${n} bays without an outline stand only in the table.`,
		noBayCure: 'Bays are added through the API, as GeoJSON.',
		gone: (code: string) => `There is no bay ${code} here (any more).`,
		keyPlan: 'Key plan: the part of the site that is shown',
		onScreen: (scale: string) => `${scale} on screen`,
		doubtfulBays: (n: number) => `${n} doubtful`,
		baysOf: (site: string) => `Bays of ${site}`,
		toScale: (n: number) => `Plan to the scale 1 : ${n}`,
		printed: (n: number, paper: string) =>
			`Scale 1 : ${n} on ${paper} printed at 100 %. Occupancy is an estimate: not a safety device, and never the only means that keeps a barrier, bollard or gate from moving.`,
		driftScale: (mg: number) => `drift of field, ${mg} mG`,
		driftNonePast: 'drift of field: no node past its limit',
		driftNone: 'drift of field: no node judged yet',
		driftAsking: 'drift of field: asking for the board of this site …',
		driftLevel: 'level part; the vertical is written beside it',
		driftLength: 'length only: headings not entered',
		driftPartly: (n: number) => `length only where the heading is not entered (${n})`,
		driftArrows: (which: string) => `Drift arrows: ${which}`,
		drift: (which: string) => `Drift: ${which}`,
		arrowChoice: { past: 'past limit', all: 'all', none: 'none' },
		oldOf: (site: string) => `${site}, old`,
		wasThen: (what: string) => `was ${what}`,
		wereThen: (sum: string) => `was: ${sum}`
	},
	near: {
		title: 'Nearest to me',
		asking: 'asking this device where it is …',
		refused:
			'This device does not say where it is. Allow the location for this page, then ask again.',
		insecure: 'A page that came over http may not ask where the device is; https is needed.',
		away: (length: string) =>
			`You are ${length} from the nearest bay: farther than a site is wide.`,
		within: (length: string) => `to within ${length}`,
		close: 'Put away'
	},
	note: {
		putAway: 'Put away',
		closed: 'Closed',
		until: 'until',
		reason: 'reason',
		before: 'before',
		howSure: 'how sure',
		heard: 'heard',
		because: 'because',
		against: 'against',
		doubt: 'doubt',
		doNotRely: (reason: string, time: string) =>
			`do not rely on this bay: ${reason}, since ${time}`,
		node: 'node',
		none: 'none',
		nobodyHasIt: 'needs a person, nobody has it',
		hasIt: (name: string, initials: string) => `${name} (${initials}) has it`,
		since: 'since'
	},
	table: {
		bay: 'Bay',
		state: 'State',
		since: 'Since',
		for: 'For',
		need: 'Need',
		condition: 'Condition',
		node: 'Node'
	},
	ui: {
		close: 'Close',
		leave: 'Leave it',
		back: 'Back',
		undo: 'Undo',
		caution: 'Caution.',
		filter: 'Filter',
		columns: 'Columns',
		rows: (n: number) => (n === 1 ? '1 row' : `${n} rows`),
		rowsOf: (shown: number, all: number) => `${shown} of ${all} rows`,
		noRow: 'No row matches the filter.',
		notes: 'Notes',
		north: (deg: number) => `North, ${deg}° from up`,
		northLetter: 'N',
		plotArrows: (title: string, unit: string) =>
			`${title}, ${unit}. Left and right arrows read the values.`,
		plotBack: 'The span before',
		plotKeys: (title: string, unit: string) =>
			`${title}, ${unit}. Left and right arrows read the values; + and − zoom, Escape goes back; drag or the range fields choose the time.`,
		noReading: 'no reading',
		answered: (status: number) => `Lodekeep answered ${status}.`
	},
	find: {
		what: 'A bay code, a node’s serial, or part of one, over all your sites.',
		label: 'Bay code or serial',
		nothing: (asked: string) => `Nothing is called “${asked}”.`,
		found: (n: number) => `${n} found; arrows choose, Enter opens`,
		list: 'Found',
		noBay: 'no bay'
	},
	desk: {
		language: 'Language',
		languageHint: 'of the sheets; data and names stay as they are',
		speak: 'Use this language'
	}
};
