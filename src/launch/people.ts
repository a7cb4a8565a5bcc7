import { appendFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Config } from '../lib/server/config';
import { hashPassword } from '../lib/server/auth/password';
import type { Database } from '../lib/server/store/connect';
import * as firstStart from '../lib/server/store/queries/first-start';
import { readablePassword } from './secrets';

/** Reserved for examples (RFC 2606): no mail ever leaves for it. */
const FIRST_ADMIN = 'admin@lodekeep.example';

/** Somebody who can sign in from now on; the password is known only here and in the file. */
export interface Made {
	who: string;
	email: string;
	/** null = the one given by LODEKEEP_ADMIN_PASSWORD. */
	password: string | null;
}

const DEMO_PEOPLE = [
	{ role: 'operator', name: 'Demo Operator', initials: 'DO' },
	{ role: 'maintenance', name: 'Demo Maintenance', initials: 'DM' },
	{ role: 'integrator', name: 'Demo Integrator', initials: 'DI' },
	{ role: 'admin', name: 'Demo Admin', initials: 'DA' }
] as const;

/** Makes the first admin when there is none; null when there is one. */
export async function firstAdmin(db: Database, config: Config): Promise<Made | null> {
	if ((await firstStart.countAdmins(db)) > 0) return null;
	const { email, password } = config.admin;
	const secret = password ?? readablePassword();
	const person = {
		email: (email ?? FIRST_ADMIN).toLowerCase(),
		name: 'First Admin',
		initials: 'FA',
		role: 'admin' as const,
		allSites: true,
		passwordHash: await hashPassword(secret),
		mustChangePassword: email === null || password === null,
		demo: false
	};
	try {
		await firstStart.addPerson(db, person, Date.now());
	} catch (error) {
		// Another copy on the same database was first.
		if ((await firstStart.countAdmins(db)) > 0) return null;
		throw error;
	}
	return { who: 'first admin', email: person.email, password: password === null ? secret : null };
}

/** One person a role for the demo site. They reach only that site, the demo admin all of them. */
export async function demoPeople(db: Database): Promise<Made[]> {
	if ((await firstStart.countDemoPeople(db)) > 0) return [];
	const made: Made[] = [];
	for (const { role, name, initials } of DEMO_PEOPLE) {
		const password = readablePassword();
		const email = `${role}@demo.lodekeep.example`;
		const rights = { allSites: role === 'admin', mustChangePassword: false, demo: true };
		const passwordHash = await hashPassword(password);
		const person = { email, name, initials, role, passwordHash, ...rights };
		await firstStart.addPerson(db, person, Date.now());
		made.push({ who: `demo ${role}`, email, password });
	}
	return made;
}

export const passwordFile = (config: Config) => join(config.dataDir, 'first-passwords.txt');

/** Kept for the person who missed the screen. */
export async function keepPasswords(config: Config, made: Made[]): Promise<void> {
	const lines = made
		.filter(({ password }) => password !== null)
		.map(({ who, email, password }) => `${who}\t${email}\t${password ?? ''}\n`);
	if (lines.length > 0) await appendFile(passwordFile(config), lines.join(''), { mode: 0o600 });
}
