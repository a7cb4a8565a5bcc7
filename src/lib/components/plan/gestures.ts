import type { Xy } from './types';

/** What fingers, mouse and wheel ask of a drawing; every one has a button or a key besides. */
export interface Gestures {
	pan: (dx: number, dy: number) => void;
	zoom: (at: Xy, factor: number) => void;
	tap: (at: Xy, coarse: boolean) => void;
	hold?: (holding: boolean) => void;
}

/** A press that moves less than this is a tap. */
const TAP_PX = 6;

/** Attaches to the element that the drawing lies in; the answer detaches. */
export function gestures(element: HTMLElement, on: Gestures): () => void {
	const held = new Map<number, Xy>();
	let moved = 0;
	const local = (event: { clientX: number; clientY: number }): Xy => {
		const box = element.getBoundingClientRect();
		return { x: event.clientX - box.left, y: event.clientY - box.top };
	};
	const down = (event: PointerEvent) => {
		if (event.button !== 0) return;
		if (held.size === 0) moved = 0;
		held.set(event.pointerId, local(event));
		element.setPointerCapture(event.pointerId);
	};
	const move = (event: PointerEvent) => {
		const before = held.get(event.pointerId);
		if (before === undefined) return;
		const now = local(event);
		const other = [...held].find(([id]) => id !== event.pointerId)?.[1];
		moved += Math.hypot(now.x - before.x, now.y - before.y);
		held.set(event.pointerId, now);
		if (other === undefined) {
			if (moved > TAP_PX) {
				on.hold?.(true);
				on.pan(now.x - before.x, now.y - before.y);
			}
			return;
		}
		const [wide, wider] = [distance(before, other), distance(now, other)];
		const centre = { x: (now.x + other.x) / 2, y: (now.y + other.y) / 2 };
		if (wide > 0) on.zoom(centre, wider / wide);
		on.pan((now.x - before.x) / 2, (now.y - before.y) / 2);
	};
	const up = (event: PointerEvent) => {
		if (!held.delete(event.pointerId)) return;
		if (held.size > 0) moved = Infinity;
		else {
			on.hold?.(false);
			if (moved <= TAP_PX && event.type === 'pointerup')
				on.tap(local(event), event.pointerType === 'touch');
		}
	};
	const wheel = (event: WheelEvent) => {
		event.preventDefault();
		const lines = event.deltaMode === WheelEvent.DOM_DELTA_LINE ? 16 : 1;
		on.zoom(local(event), Math.exp((-event.deltaY * lines) / (event.ctrlKey ? 120 : 480)));
	};
	element.addEventListener('pointerdown', down);
	element.addEventListener('pointermove', move);
	element.addEventListener('pointerup', up);
	element.addEventListener('pointercancel', up);
	element.addEventListener('wheel', wheel, { passive: false });
	return () => {
		element.removeEventListener('pointerdown', down);
		element.removeEventListener('pointermove', move);
		element.removeEventListener('pointerup', up);
		element.removeEventListener('pointercancel', up);
		element.removeEventListener('wheel', wheel);
	};
}

const distance = (a: Xy, b: Xy) => Math.hypot(a.x - b.x, a.y - b.y);
