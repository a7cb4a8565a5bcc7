import { waitingList } from './waiting.svelte';

/** Sends what this person recorded earlier, from whatever sheet is open. The answer ends it. */
export function sendWaiting(personId: number): () => void {
	const list = waitingList(personId);
	void list.start(null);
	return () => {
		list.stop();
	};
}
