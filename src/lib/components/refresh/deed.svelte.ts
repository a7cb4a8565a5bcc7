import { send } from '$lib/components/live/ask';
import { session } from '$lib/components/live/session.svelte';
import { words } from '$lib/format/messages';
import { marginNotes } from '$lib/ui/margin-notes.svelte';

/** One deed at a time: whether it is under way and what went wrong. */
export function deed() {
	let busy = $state(false);
	let trouble = $state<string | null>(null);
	return {
		get busy() {
			return busy;
		},
		get trouble() {
			return trouble;
		},
		/** True when done; `said` is written into the margin. */
		async run(
			method: 'POST' | 'PATCH',
			path: string,
			body: unknown,
			said: string
		): Promise<boolean> {
			busy = true;
			trouble = null;
			try {
				await send(method, path, body);
				marginNotes.add(said);
				return true;
			} catch (error) {
				session.heed(error);
				trouble = error instanceof Error ? error.message : words().signIn.failed;
				return false;
			} finally {
				busy = false;
			}
		}
	};
}
