/** Short notes in the sheet's margin that say what has just happened; they go by themselves. */
export interface MarginNote {
	id: number;
	text: string;
	trouble: boolean;
	action?: { text: string; run: () => void };
}

const SHOWN_MS = 8_000;
const notes = $state<MarginNote[]>([]);
let lastId = 0;

export const marginNotes = {
	get all(): readonly MarginNote[] {
		return notes;
	},
	/** Troubles and notes with an action stay until they are closed. */
	add(text: string, more: { trouble?: boolean; action?: MarginNote['action'] } = {}): number {
		const id = ++lastId;
		const trouble = more.trouble ?? false;
		notes.push({ id, text, trouble, ...(more.action ? { action: more.action } : {}) });
		if (!trouble && !more.action) setTimeout(() => marginNotes.close(id), SHOWN_MS);
		return id;
	},
	close(id: number): void {
		const at = notes.findIndex((note) => note.id === id);
		if (at >= 0) notes.splice(at, 1);
	}
};
