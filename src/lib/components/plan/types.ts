/** A bay as GET /api/v1/sites/{site}/bays lists it (api.md, 'Routes'). */
export interface BayItem {
	code: string;
	zone: string;
	state: 'occupied' | 'vacant' | 'unknown';
	since: string | null;
	confidence: number | null;
	doubt: { reason: string; since: string } | null;
	condition: string;
	also: string[];
	lastKnown: { state: 'occupied' | 'vacant' | 'unknown'; at: string } | null;
	closed: { from: string; to: string; reason: string } | null;
	node: string | null;
}

/** A point on the page in metres: x to the right, y down the sheet. */
export interface Xy {
	x: number;
	y: number;
}

/** What the plan needs of a bay besides its state. */
export interface BayOutline {
	code: string;
	zone: string;
	/** GeoJSON exterior ring, [lon, lat] in degrees, or null where not drawn. */
	ring: readonly (readonly [number, number])[] | null;
}

/** A bay laid out on the page. */
export interface PlacedBay {
	code: string;
	zone: string;
	/** Corners without the closing one, in metres on the page. */
	corners: readonly Xy[];
	centre: Xy;
	shortM: number;
	longM: number;
	/** Direction of the long side on the page, radians in [0, π). */
	longAngle: number;
}

export interface PlanRow {
	zone: string;
	/** 1 is the first row of its zone. */
	number: number;
	/** Indices into the layout's bays, from left to right or from top to bottom. */
	bays: readonly number[];
}

export interface Box {
	minX: number;
	minY: number;
	maxX: number;
	maxY: number;
}

export interface PlanLayout {
	bays: readonly PlacedBay[];
	rows: readonly PlanRow[];
	/** For each bay, which row it stands in. */
	rowOfBay: readonly number[];
	box: Box;
	/** Clockwise turn of true north from straight up the sheet, radians. */
	northAngle: number;
	/** Bays without geometry: they are listed, not drawn. */
	undrawn: readonly string[];
}
