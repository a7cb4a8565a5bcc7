/** One item of GET /api/v1/nodes/{serial}/readings: a reading, or a bucket of several. */
export interface ReadingItem {
	at: string;
	n: number;
	min: readonly [number, number, number];
	max: readonly [number, number, number];
	mean: readonly [number, number, number];
	tempC: number | null;
}
type Vec = readonly [number, number, number];

export interface FieldSeries {
	timesS: number[];
	/** x, y, z in mG, offset taken out; null is a gap. */
	axes: { mean: (number | null)[]; min: (number | null)[]; max: (number | null)[] }[];
	magnitudeMg: (number | null)[];
	/** Distance from the baseline of now, mG; all null without a baseline. */
	disturbanceMg: (number | null)[];
	tempC: (number | null)[];
	/** Whether items stand for several readings, so that a band of min and max is drawn. */
	bucketed: boolean;
}

/** More than this many usual spacings without a reading is a gap (method 4: silent after 3 periods). */
const GAP_SPACINGS = 3.2;

/** Readings as plot columns: B = r − O per axis (method 2), gaps as an extra point without values. */
export function fieldSeries(
	items: readonly ReadingItem[],
	offsetMg: Vec | null,
	baselineMg: Vec | null,
	spacingS: number
): FieldSeries {
	const offset = offsetMg ?? [0, 0, 0];
	const series: FieldSeries = {
		timesS: [],
		axes: [0, 1, 2].map(() => ({ mean: [], min: [], max: [] })),
		magnitudeMg: [],
		disturbanceMg: [],
		tempC: [],
		bucketed: items.some((item) => item.n > 1)
	};
	let lastS: number | null = null;
	for (const item of items) {
		const atS = Date.parse(item.at) / 1000;
		if (lastS !== null && atS - lastS > GAP_SPACINGS * spacingS)
			push(series, lastS + spacingS, null, offset, baselineMg);
		push(series, atS, item, offset, baselineMg);
		lastS = atS;
	}
	return series;
}

function push(
	series: FieldSeries,
	atS: number,
	item: ReadingItem | null,
	offset: Vec,
	baseline: Vec | null
): void {
	series.timesS.push(atS);
	series.axes.forEach((axis, at) => {
		for (const part of ['mean', 'min', 'max'] as const)
			axis[part].push(item === null ? null : (item[part][at] ?? 0) - (offset[at] ?? 0));
	});
	const field = item === null ? null : item.mean.map((mg, at) => mg - (offset[at] ?? 0));
	series.magnitudeMg.push(field === null ? null : Math.hypot(...field));
	series.disturbanceMg.push(
		field === null || baseline === null
			? null
			: Math.hypot(...field.map((mg, at) => mg - (baseline[at] ?? 0)))
	);
	series.tempC.push(item === null ? null : item.tempC);
}

/** The usual spacing of readings: the bucket's width, else the node's period, at least 1 s. */
export function spacingOf(
	items: readonly ReadingItem[],
	bucketMs: number | null,
	periodS: number
): number {
	return items.length === 0 || bucketMs === null
		? Math.max(1, periodS)
		: Math.max(bucketMs / 1000, periodS);
}
