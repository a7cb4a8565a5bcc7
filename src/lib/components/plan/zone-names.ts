import { flagBox, type Box, type Flag } from './flags';
import { textWidth, type Pen } from './pen';
import type { PlanLayout } from './types';
import { toScreen, type View } from './view';

interface Named {
	layout: PlanLayout;
	view: View;
	zoneNames: ReadonlyMap<string, string>;
	flags: readonly Flag[];
	letterLeastPx?: number | undefined;
}
const LEAST_PX = 12;
const GAP_PX = 4;

/** A zone's name over its upper left corner, lifted where a datum triangle stands in its place. */
export function placeZoneNames(
	scene: Named
): { text: string; x: number; y: number; sizePx: number }[] {
	const tops = new Map<string, { x: number; y: number }>();
	for (const bay of scene.layout.bays) {
		const [top, left] = [
			Math.min(...bay.corners.map((c) => c.y)),
			Math.min(...bay.corners.map((c) => c.x))
		];
		const old = tops.get(bay.zone);
		tops.set(bay.zone, { x: Math.min(left, old?.x ?? left), y: Math.min(top, old?.y ?? top) });
	}
	const sizePx = Math.max(LEAST_PX, scene.letterLeastPx ?? 0);
	const flags = scene.flags.map((flag) => flagBox(scene, flag)).filter((box) => box !== null);
	return [...tops].map(([zone, corner]) => {
		const at = toScreen(scene.view, corner);
		const text = scene.zoneNames.get(zone) ?? zone;
		const box: Box = {
			left: at.x - GAP_PX,
			top: at.y - GAP_PX - sizePx,
			right: at.x + textWidth(text, sizePx) + GAP_PX,
			bottom: at.y - GAP_PX
		};
		const clear = Math.min(box.bottom, ...flags.filter((f) => meet(f, box)).map((f) => f.top - 2));
		return { text, x: at.x, y: clear - sizePx / 2, sizePx };
	});
}

const meet = (a: Box, b: Box): boolean =>
	a.left < b.right && a.right > b.left && a.top < b.bottom && a.bottom > b.top;

export function drawZoneNames(pen: Pen, scene: Named): void {
	for (const { text, x, y, sizePx } of placeZoneNames(scene))
		pen.text(text, { x, y }, { ink: 'ink-2', sizePx, bold: true });
}
