import { localMetres } from './local-metres';
import type { BayOutline } from './types';

export interface Near {
	code: string;
	distanceM: number;
}

/** The bays nearest to a place on Earth, by the middle of their outline; undrawn bays are nowhere. */
export function nearestBays(
	outlines: readonly BayOutline[],
	here: { lonDeg: number; latDeg: number },
	most: number
): Near[] {
	const metres = localMetres(here.lonDeg, here.latDeg);
	return outlines
		.flatMap(({ code, ring }) => {
			const corners = (ring ?? []).slice(0, -1);
			if (corners.length === 0) return [];
			const lon = corners.reduce((sum, corner) => sum + corner[0], 0) / corners.length;
			const lat = corners.reduce((sum, corner) => sum + corner[1], 0) / corners.length;
			const { x, y } = metres(lon, lat);
			return [{ code, distanceM: Math.hypot(x, y) }];
		})
		.sort((a, b) => a.distanceM - b.distanceM)
		.slice(0, most);
}
