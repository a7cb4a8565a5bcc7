import type { Node } from './state';
import { set3 } from './vec';

/**
 * The site's geomagnetic change (h, e, z) put into the node's own axes: ĥ the horizontal part of its own quiet
 * field, ê = ẑ × ĥ (method 5.2). An occupied baseline follows it; a vacant one sees it by itself.
 */
export function followSite(n: Node, gMg: readonly [number, number, number]): void {
	const { fast, slow } = n;
	const quiet = slow.reference?.fieldMg ?? null;
	if (slow.state === 'occupied' && quiet !== null) {
		const horizontal = Math.hypot(quiet[0], quiet[1]);
		if (horizontal > 0) {
			const [hx, hy] = [quiet[0] / horizontal, quiet[1] / horizontal];
			const [dh, de] = [gMg[0] - fast.site[0], gMg[1] - fast.site[1]];
			fast.baseline[0] += dh * hx - de * hy;
			fast.baseline[1] += dh * hy + de * hx;
			fast.baseline[2] += gMg[2] - fast.site[2];
		}
	}
	set3(fast.site, gMg);
}
