import type { BayItem } from '$lib/components/plan/types';

type Vec = readonly [number, number, number];

/** GET /api/v1/sites/{site}/bays/{code} */
export interface BayDetail extends BayItem {
	personal: boolean;
	evidence: { because: string[]; against: string[] };
	report: {
		serial: string;
		heardAt: string | null;
		fieldMg: Vec | null;
		baselineMg: Vec | null;
		disturbanceMg: number | null;
		onMg: number | null;
		offMg: number | null;
		tempC: number | null;
		batteryMv: number | null;
	} | null;
}

/** GET /api/v1/nodes/{serial} */
export interface NodeDetail {
	serial: string;
	bay: string | null;
	profile: string;
	condition: string;
	also: string[];
	unsignedAllowed: boolean;
	firmware: string | null;
	heardAt: string | null;
	placedAt: string | null;
	periodS: number;
	deltaMg: number;
	reading: { at: string; tempC: number | null; batteryMv: number | null; clipped: boolean } | null;
	reference: {
		learnedAt: string;
		fieldMg: Vec;
		sigmaMg: number;
		acceptedAt: string | null;
		provisional: boolean;
	} | null;
	offsetMg: Vec | null;
}

export interface EventItem {
	id: number;
	bay: string;
	type: string;
	state: 'occupied' | 'vacant' | 'unknown';
	at: string;
	recordedAt: string;
	confidence: number | null;
	uncertaintyS: number;
	late: boolean;
	voids?: number;
}
