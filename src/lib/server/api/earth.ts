import { checkAgainstEarth, decimalYear, earthField } from '$lib/magnetics/earth-field';
import type { EarthCheck } from '$lib/schemas/desk-parameters';
import * as nodes from '$lib/server/store/queries/nodes';
import type { SiteRow } from '$lib/server/store/queries/sites';
import type { Db } from '$lib/server/store/queries/people';
import { rfc3339OrNull } from './time';

const M_PER_KM = 1000;
const round = (value: number, digits: number): number =>
	Math.round(value * 10 ** digits) / 10 ** digits;

/** A node's newest learned quiet field against the World Magnetic Model at its site and date (method 8). */
export async function earthCheckOf(
	db: Db,
	site: SiteRow,
	nodeId: number,
	nowMs: number
): Promise<EarthCheck> {
	const r = await nodes.currentReference(db, nodeId);
	const year = decimalYear(r?.learnedAtMs ?? nowMs);
	const earth = earthField(site.latDeg, site.lonDeg, site.altitudeM / M_PER_KM, year);
	const common = {
		learnedAt: rfc3339OrNull(r?.learnedAtMs ?? null),
		accepted: r?.acceptedAtMs != null,
		earthMg: round(earth.totalMg, 1),
		horizontalMg: round(earth.horizontalMg, 1),
		inclinationDeg: round(earth.inclinationDeg, 1),
		withinModelYears: earth.withinModelYears
	};
	if (r === null) return { ...common, quietMg: null, ratio: null, verdict: 'not_learned' };
	// Without a pair's offset the length of the vector is that of field and offset together (method 3).
	if (r.offsetXMg === null) return { ...common, quietMg: null, ratio: null, verdict: 'no_offset' };
	const quietMg = Math.hypot(r.xMg, r.yMg, r.zMg);
	const { ratio, verdict } = checkAgainstEarth(quietMg, earth.totalMg);
	return { ...common, quietMg: round(quietMg, 1), ratio: round(ratio, 3), verdict };
}
