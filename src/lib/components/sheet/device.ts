import { dev } from '$app/environment';

/** What this browser can do for opening without a connection. */
export interface DeviceState {
	/** Installing and opening without a connection are possible here. */
	ready: boolean;
	/** null when nothing is missing; `worker`: it has no service worker (a private window?). */
	missing: 'https' | 'worker' | null;
}

export function deviceState(): DeviceState {
	if (typeof window === 'undefined') return { ready: false, missing: null };
	if (!window.isSecureContext) return { ready: false, missing: 'https' };
	if (!('serviceWorker' in navigator)) return { ready: false, missing: 'worker' };
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
