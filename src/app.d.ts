import type { KeyFound } from '$lib/server/auth/directory';
import type { Reach } from '$lib/server/auth/reach';

declare global {
	namespace App {
		interface Error {
			message: string;
			/** Finds the log line of an unexpected error; shown to people as a reference. */
			reference?: string;
		}
		interface Locals {
			/** Who asks and what they may see; null = nobody signed in, no key. Set by hooks.server.ts. */
			reach: Reach | null;
			/** The API key behind `reach`, null for people. */
			key: KeyFound | null;
		}
		interface PageData {
			reach?: { name: string; role: string } | null;
		}
	}
}

export {};
