import { AskError } from './ask';

/** Whether this browser's session still holds; kept in the browser only, there is one person a browser. */
let signedOut = $state(false);

export const session = {
	get signedOut(): boolean {
		return signedOut;
	},
	/** Call with what an ask threw. */
	heed(error: unknown): void {
		if (error instanceof AskError && error.status === 401) signedOut = true;
	},
	/** Call when an ask was answered. */
	answered(): void {
		signedOut = false;
	}
};
