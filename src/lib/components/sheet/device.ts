import { dev } from '$app/environment';

/** What this browser can do for opening without a connection, in words. */
export interface DeviceState {
	/** Installing and opening without a connection are possible here. */
	ready: boolean;
	/** What is missing, as a sentence; null when nothing is. */
	missing: string | null;
}

export function deviceState(): DeviceState {
	if (typeof window === 'undefined') return { ready: false, missing: null };
	if (!window.isSecureContext)
		return {
			ready: false,
			missing: `This page came over http from ${location.host}. Installing Lodekeep and opening it without a connection need https there (TLS_CERT and TLS_KEY, or a proxy that ends TLS).`
		};
	if (!('serviceWorker' in navigator))
		return { ready: false, missing: 'This browser has no service worker (a private window?).' };
	return { ready: true, missing: null };
}

/** Registered once the sheet stands, so that the shell is not fetched against the first drawing. */
export function registerWorker(): () => void {
	if (dev || !deviceState().ready) return () => undefined;
	const AFTER_MS = 3_000;
	const timer = setTimeout(() => {
		navigator.serviceWorker.register('/service-worker.js').catch(() => undefined);
	}, AFTER_MS);
	return () => clearTimeout(timer);
}
