const EVERY_MS = 20_000;

/** Calls while the page is looked at; the answer ends it. */
export function everyVisible(call: () => void): () => void {
	const timer = setInterval(() => {
		if (document.visibilityState === 'visible') call();
	}, EVERY_MS);
	return () => clearInterval(timer);
}
