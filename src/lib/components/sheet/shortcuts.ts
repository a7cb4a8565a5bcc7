import { singleKeys } from '$lib/ui/preference.svelte';
import type { Sheet } from './sheets';

interface Targets {
	sheets: () => readonly Sheet[];
	open: (sheet: Sheet) => void;
	find: () => void;
	list: () => void;
}

const CHORD_MS = 1500;
const RESTING =
	'input, textarea, select, [contenteditable], [role="grid"], [role="dialog"], [role="menu"]';

/** `g` and a letter opens a sheet, `/` finds, `?` lists. They rest in fields, dialogs and on the plan. */
export function shortcuts(on: Targets): (event: KeyboardEvent) => void {
	let chordUntilMs = 0;
	return (event) => {
		if (!singleKeys.on || event.ctrlKey || event.metaKey || event.altKey) return;
		if (event.target instanceof Element && event.target.closest(RESTING) !== null) return;
		const inChord = Date.now() < chordUntilMs;
		chordUntilMs = 0;
		if (inChord) {
			const sheet = on.sheets().find(({ letter }) => letter === event.key.toLowerCase());
			if (sheet === undefined) return;
			on.open(sheet);
		} else if (event.key === 'g') chordUntilMs = Date.now() + CHORD_MS;
		else if (event.key === '/') on.find();
		else if (event.key === '?') on.list();
		else return;
		event.preventDefault();
	};
}
