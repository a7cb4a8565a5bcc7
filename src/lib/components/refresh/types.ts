/** A row of the sheet 'Film refreshes' (GET /api/desk/sites/{site}/refreshes). */
export interface RefreshItem {
	id: number;
	node: string;
	bay: string;
	zone: string;
	state: string;
	origin: string;
	reason: string;
	askedAt: string;
	askedBy: string;
	mine: boolean;
	approvedAt: string | null;
	waiting: { for: string; since: string } | null;
	pulseAt: string | null;
	stillReadings: number;
	verdict: string | null;
	visitWanted: boolean;
	endedAt: string | null;
	bulk: number | null;
	bayState: 'vacant' | 'occupied' | 'unknown';
	baySince: string | null;
}

export interface Check {
	name: string;
	ok: boolean;
	says: string;
}
type Vec = readonly [number, number, number];
export interface Proof {
	filmLossMg: Vec | null;
	filmLossTotalMg: number | null;
	filmLossPercent: number | null;
	fieldBeforeMg: Vec | null;
	fieldAfterMg: Vec;
	offsetBeforeMg: Vec | null;
	offsetAfterMg: Vec;
	noiseBeforeMg: number | null;
	noiseAfterMg: number | null;
	unexplainedBeforeMg: number | null;
	unexplainedAfterMg: number;
	driftingMg: number;
	gainRatio: number | null;
	readings: number;
	tempC: number | null;
	checks: Check[];
}
export interface RefreshDetail extends Omit<RefreshItem, 'zone' | 'mine' | 'bulk'> {
	transitions: { from: string | null; to: string; who: string; why: string; at: string }[];
	proof: Proof | null;
	usuallyEmpty: string | null;
}

export interface LeftOut {
	bay: string;
	why: string;
}
export interface Bulk {
	id: number;
	what: string;
	reason: string;
	state: 'running' | 'paused' | 'called_off' | 'done';
	askedBy: string;
	askedAt: string;
	endedAt: string | null;
	counts: Record<string, number>;
	leftOut: LeftOut[];
}
export interface Settings {
	ownApproval: boolean;
	mostAtOnce: number;
	holdOffH: number;
	scheduleOn: boolean;
	scheduleReasons: string[];
	mostANight: number;
	quietFromMin: number;
	quietToMin: number;
	pairRule: string;
	timezone: string;
}
export interface RefreshSheet {
	items: RefreshItem[];
	due: { bay: string; zone: string; reasons: string[] }[];
	bulks: Bulk[];
	settings: Settings;
}
export interface Preview {
	bays: string[];
	emptyNow: number;
	leftOut: LeftOut[];
	price: { chargeMc: number; batteryDays: number };
	mostDays: number;
}
