import { sizeOf } from './draw-bays';
import { closedPath, type Pen } from './pen';
import type { PlanLayout, Xy } from './types';
import { toScreen, type View } from './view';

export interface Flag {
	/** Index of the bay. */
	bay: number;
	/** Initials of who has it; null = nobody yet. */
	initials: string | null;
}
interface Where {
	layout: PlanLayout;
	view: View;
	letterLeastPx?: number | undefined;
}
export interface Box {
	left: number;
	top: number;
	right: number;
	bottom: number;
}

/** The triangle's tip and half width and height, px; null where there is no such bay. */
function triangleOf({ layout, view }: Where, flag: Flag): { tip: Xy; w: number; h: number } | null {
	const bay = layout.bays[flag.bay];
	if (bay === undefined) return null;
	const corners = bay.corners.map((c) => toScreen(view, c));
	const centre = toScreen(view, bay.centre);
	const large = sizeOf(bay.shortM * view.scale) === 'large';
	const [w, h] = large ? [6, 10] : [4.5, 8];
	// On the rim straight above the middle: at a corner it could be the neighbour's.
	const tip = large ? { x: centre.x, y: rimAbove(corners, centre) + 4 } : centre;
	return { tip, w, h };
}

/** What a triangle covers, px, so that lettering can keep clear of it. */
export function flagBox(where: Where, flag: Flag): Box | null {
	const found = triangleOf(where, flag);
	if (found === null) return null;
	const { tip, w, h } = found;
	return { left: tip.x - w, top: tip.y - h, right: tip.x + w, bottom: tip.y };
}

/** The datum triangle: ochre while nobody has it, open in ink with initials once somebody has. */
export function drawFlag(pen: Pen, where: Where, flag: Flag): void {
	const found = triangleOf(where, flag);
	if (found === null) return;
	const { tip, w, h } = found;
	const triangle = closedPath([
		{ x: tip.x - w, y: tip.y - h },
		{ x: tip.x + w, y: tip.y - h },
		tip
	]);
	pen.fill([triangle], flag.initials === null ? 'accent' : 'paper');
	pen.stroke([triangle], { ink: flag.initials === null ? 'paper' : 'ink', width: 1.2 });
	if (flag.initials === null) pen.stroke([triangle], { ink: 'accent', width: 0.8 });
	else
		pen.text(
			flag.initials,
			{ x: tip.x + w + 3, y: tip.y - h / 2 },
			{
				ink: 'ink',
				sizePx: Math.max(10, where.letterLeastPx ?? 0),
				cleared: true
			}
		);
}

/** Where a line straight up from inside leaves an outline, px. */
function rimAbove(corners: readonly Xy[], from: Xy): number {
	const crossings = corners.flatMap((a, at) => {
		const b = corners[(at + 1) % corners.length] ?? a;
		if (a.x > from.x === b.x > from.x) return [];
		return [a.y + ((from.x - a.x) / (b.x - a.x)) * (b.y - a.y)];
	});
	return Math.min(from.y, ...crossings);
}
