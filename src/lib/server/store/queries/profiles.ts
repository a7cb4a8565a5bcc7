import { eq } from 'drizzle-orm';
import { builtInProfile, parseProfile, type SensorProfile } from '$lib/magnetics/sensor-profile';
import { profile } from '../schema';
import type { Db } from './people';

/** A stored profile, or the built-in one of that code when the stored one cannot be read. */
export function readProfile(code: string, body: string): SensorProfile | null {
	try {
		const parsed = parseProfile(JSON.parse(body));
		if (parsed.ok) return parsed.profile;
	} catch {
		// Not JSON: the built-in one stands in.
	}
	return builtInProfile(code);
}

/** true when there is such a profile; a built-in one is written down on its first use. */
export async function ensure(db: Db, code: string, nowMs: number): Promise<boolean> {
	const rows = await db.select({ code: profile.code }).from(profile).where(eq(profile.code, code));
	if (rows.length > 0) return true;
	const known = builtInProfile(code);
	if (known === null) return false;
	await db
		.insert(profile)
		.values({ code, body: JSON.stringify(known), builtIn: true, changedAtMs: nowMs })
		.onDuplicateKeyUpdate({ set: { code } });
	return true;
}
