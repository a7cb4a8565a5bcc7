/** The ground plan: bays in rows, one node a bay, a lane along each row. Metres east and north of the site's origin. */
export interface BayPlan {
	code: string;
	zone: string;
	/** Bays of one row share this label (queue rule). */
	row: string;
	eastM: number;
	northM: number;
	/** Direction of a vehicle's nose when it parks forwards, degrees east of north. */
	noseDeg: number;
	widthM: number;
	lengthM: number;
}

export interface NodePlan {
	serial: string;
	/** Index into `SitePlan.bays`. */
	bayIndex: number;
	eastM: number;
	northM: number;
	/** Direction of the node's x axis, degrees east of north; people need not know it. */
	headingDeg: number;
	/** Small lean of the housing, degrees. */
	rollDeg: number;
	pitchDeg: number;
	profileCode: string;
}

/** Centre line on which vehicles drive past a row; direction of travel = alongDeg. */
export interface Lane {
	row: string;
	eastM: number;
	northM: number;
	alongDeg: number;
	lengthM: number;
}

export interface SitePlan {
	slug: string;
	name: string;
	latDeg: number;
	lonDeg: number;
	altitudeM: number;
	timezone: string;
	bays: BayPlan[];
	nodes: NodePlan[];
	lanes: Lane[];
}

export interface RowSpec {
	zone: string;
	row: string;
	/** Codes are prefix + two digits, counted from `first`. */
	prefix: string;
	first: number;
	count: number;
	/** Start of the row's centre line. */
	eastM: number;
	northM: number;
	alongDeg: number;
	noseDeg: number;
	widthM?: number;
	lengthM?: number;
}

const RADIANS = Math.PI / 180;
/** Below this angle between nose and row the bays lie end to end along the kerb. */
const PARALLEL_DEG = 20;
const LANE_HALF_WIDTH_M = 2.6;
const KERB_LANE_HALF_WIDTH_M = 1.75;
const END_TO_END_GAP_M = 0.7;

export const unitEastNorth = (deg: number): readonly [number, number] => [
	Math.sin(deg * RADIANS),
	Math.cos(deg * RADIANS)
];

/** Lays `count` rectangular bays side by side (or end to end) along a line, and the lane before them. */
export function layRow(spec: RowSpec): { bays: BayPlan[]; lane: Lane } {
	const widthM = spec.widthM ?? 2.5;
	const lengthM = spec.lengthM ?? 5;
	const [alongE, alongN] = unitEastNorth(spec.alongDeg);
	const [noseE, noseN] = unitEastNorth(spec.noseDeg);
	const sine = Math.abs(alongE * noseN - alongN * noseE);
	const parallel = sine < Math.sin(PARALLEL_DEG * RADIANS);
	const pitchM = parallel ? lengthM + END_TO_END_GAP_M : widthM / sine;
	const bays = Array.from({ length: spec.count }, (_, i): BayPlan => {
		const alongM = (i + 0.5) * pitchM;
		return {
			code: `${spec.prefix}${String(spec.first + i).padStart(2, '0')}`,
			zone: spec.zone,
			row: spec.row,
			eastM: spec.eastM + alongE * alongM,
			northM: spec.northM + alongN * alongM,
			noseDeg: spec.noseDeg,
			widthM,
			lengthM
		};
	});
	// The lane lies on the side that the noses point away from; left of the row for kerb bays.
	const side = parallel ? 1 : Math.sign(alongE * noseN - alongN * noseE) * -1;
	const cosine = Math.abs(alongE * noseE + alongN * noseN);
	const depthM = parallel ? widthM / 2 : (lengthM * sine + widthM * cosine) / 2;
	const offM = depthM + (parallel ? KERB_LANE_HALF_WIDTH_M : LANE_HALF_WIDTH_M);
	return {
		bays,
		lane: {
			row: spec.row,
			eastM: spec.eastM - alongN * offM * side,
			northM: spec.northM + alongE * offM * side,
			alongDeg: spec.alongDeg,
			lengthM: pitchM * spec.count
		}
	};
}

/** The four corners of a bay, metres, counter-clockwise seen from above (RFC 7946 exterior ring order). */
export function corners(bay: BayPlan): (readonly [number, number])[] {
	const [noseE, noseN] = unitEastNorth(bay.noseDeg);
	const at = (forward: number, left: number): readonly [number, number] => [
		bay.eastM + noseE * forward - noseN * left,
		bay.northM + noseN * forward + noseE * left
	];
	const [l, w] = [bay.lengthM / 2, bay.widthM / 2];
	return [at(l, -w), at(l, w), at(-l, w), at(-l, -w)];
}

/** Metres in the site's plane → [lon, lat]; series for the WGS 84 ellipsoid, [M], within 1 mm over 1 km. */
export function toLonLat(site: SitePlan, eastM: number, northM: number): [number, number] {
	const phi = site.latDeg * RADIANS;
	const perLat = 111132.954 - 559.822 * Math.cos(2 * phi) + 1.175 * Math.cos(4 * phi);
	const perLon = 111412.84 * Math.cos(phi) - 93.5 * Math.cos(3 * phi);
	const round = (deg: number) => Math.round(deg * 1e8) / 1e8;
	return [round(site.lonDeg + eastM / perLon), round(site.latDeg + northM / perLat)];
}

export interface Polygon {
	type: 'Polygon';
	coordinates: [number, number][][];
}

/** A bay as RFC 7946 polygon: closed ring, counter-clockwise, [lon, lat]. */
export function bayPolygon(site: SitePlan, bay: BayPlan): Polygon {
	const ring = corners(bay).map(([eastM, northM]) => toLonLat(site, eastM, northM));
	return { type: 'Polygon', coordinates: [[...ring, ring[0]!]] };
}
