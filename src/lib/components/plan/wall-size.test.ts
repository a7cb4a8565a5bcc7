import { expect, test } from 'vitest';
import { svgPen } from './svg-pen';
import { drawPlan } from './draw-plan';
import { layOut } from './layout';
import { fit } from './view';
import { LETTER_MM, LETTER_UNITS, NOMINAL_PX_PER_MM, unitPx } from './wall-size';

/** A square of about 3 m by 5 m at the equator: 1° is about 111 km (published). */
const ring = (column: number): [number, number][] => {
	const at = (eastM: number, northM: number): [number, number] => [
		(column * 3 + eastM) / 111_319,
		northM / 110_574
	];
	return [at(0, 0), at(3, 0), at(3, 5), at(0, 5), at(0, 0)];
};
const layout = layOut(
	['A1', 'A2', 'A3'].map((code, column) => ({ code, zone: 'z', ring: ring(column) }))
);

// Issue 4, 'Wall': lines at least 0.6 mm and lettering at least 12 mm; a capital is 0.73 em.
test.each([1.2, NOMINAL_PX_PER_MM, 8])(
	'at %f px a mm every line is 0.6 mm or more, every capital 12 mm',
	(pxPerMm) => {
		const unitMm = unitPx(pxPerMm) / pxPerMm;
		const size = { width: 1600 / unitPx(pxPerMm), height: 900 / unitPx(pxPerMm) };
		const pen = svgPen();
		drawPlan(pen, {
			...{ layout, size, view: fit(layout.box, size) },
			marks: (['taken', 'unknown', 'closed'] as const).map((mark) => ({
				...{ mark, wasText: null, faded: false }
			})),
			flags: [{ bay: 1, initials: 'MT' }],
			...{ revised: [], picked: null, cursor: null, leaderTo: null },
			zoneNames: new Map([['z', 'North']]),
			letterLeastPx: LETTER_UNITS
		});
		const drawn = pen.take().replace(/<defs>.*<\/defs>/, '');
		const all = (attribute: string) =>
			[...drawn.matchAll(new RegExp(` ${attribute}="([\\d.]+)"`, 'g'))].map((m) => Number(m[1]));
		expect(all('stroke-width').length).toBeGreaterThan(3);
		expect(Math.min(...all('stroke-width')) * unitMm).toBeGreaterThanOrEqual(0.6);
		expect(all('font-size').length).toBeGreaterThan(0);
		// Sizes in the drawing are written to 0.01 of a unit.
		expect((Math.min(...all('font-size')) + 0.005) * unitMm * 0.73).toBeGreaterThanOrEqual(12);
		expect(LETTER_MM * 0.73).toBeCloseTo(12, 6);
	}
);
