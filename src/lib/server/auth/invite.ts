import type { RequestEvent } from '@sveltejs/kit';
import { instance, type Instance } from '$lib/server/api/instance';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import * as audit from '$lib/server/store/queries/audit';
import * as people from '$lib/server/store/queries/people';
import * as tickets from '$lib/server/store/queries/tickets';
import { linkOrigin } from './link-origin';
import { hashPassword, passwordProblem } from './password';
import { PATHS } from './paths';
import { startSession } from './sign-in';
import { hashTicket, looksLikeTicket, newTicket } from './ticket';

export const INVITATION_DAYS = 7;
const DAY_MS = 86_400_000;

export type Invited = { ok: true; personId: number } | { ok: false; reason: 'email_taken' };

export interface Invitation {
	email: string;
	name: string;
	initials: string;
	role: people.Role;
	sites: people.NewPerson['sites'];
}

/** Makes the person and mails a one-time link, both or neither. The caller has checked: an admin. */
export async function invite(
	by: { actor: string; name: string },
	wanted: Invitation,
	nowMs = Date.now()
): Promise<Invited> {
	const app = instance();
	if ((await people.byEmail(app.store.db, wanted.email)) !== null) {
		return { ok: false, reason: 'email_taken' };
	}
	const personId = await app.store.db.transaction(async (tx) => {
		const id = await people.create(tx, wanted, nowMs);
		await mailInvitation(app, tx, { id, ...wanted, demo: false }, by.name, nowMs);
		await audit.note(
			tx,
			{
				actor: by.actor,
				what: 'person.invited',
				subject: wanted.email,
				detail: { role: wanted.role, sites: wanted.sites }
			},
			nowMs
		);
		return id;
	});
	app.directory.invalidate();
	app.sender.wake();
	return { ok: true, personId };
}

/** The first link lost or over: a new one, which makes the first worthless. */
export async function inviteAgain(
	by: { actor: string; name: string },
	personId: number,
	nowMs = Date.now()
): Promise<boolean> {
	const app = instance();
	const done = await app.store.db.transaction(async (tx) => {
		const person = await people.byId(tx, personId);
		if (person === null || person.passwordHash !== null || person.switchedOffAtMs !== null) {
			return false;
		}
		await mailInvitation(app, tx, person, by.name, nowMs);
		await audit.note(
			tx,
			{ actor: by.actor, what: 'person.invited_again', subject: person.email },
			nowMs
		);
		return true;
	});
	app.sender.wake();
	return done;
}

async function mailInvitation(
	app: Instance,
	tx: people.Db,
	to: { id: number; email: string; name: string; demo: boolean },
	inviter: string,
	nowMs: number
): Promise<void> {
	const { text: secret, hash } = newTicket();
	const expiresAtMs = nowMs + INVITATION_DAYS * DAY_MS;
	await tickets.create(tx, { hash, personId: to.id, purpose: 'invitation', expiresAtMs }, nowMs);
	const link = `${linkOrigin(app)}${PATHS.invitation}?ticket=${secret}`;
	const text = [
		`${to.name},`,
		'',
		`${inviter} invites you to Lodekeep. Choose a password here:`,
		'',
		link,
		'',
		`The link works once, until ${new Date(expiresAtMs).toISOString().slice(0, 16)}Z.`
	].join('\n');
	await enqueueMail(
		tx,
		app.secret,
		{ to: to.email, subject: 'Your invitation to Lodekeep', text, demo: to.demo },
		nowMs
	);
}

export type TicketHolder = { name: string; email: string } | null;

/** Whom a link is for, to greet them; null when it is used, over or made up. */
export async function invitationHolder(
	ticket: string,
	purpose: tickets.Purpose = 'invitation'
): Promise<TicketHolder> {
	if (!looksLikeTicket(ticket)) return null;
	const app = instance();
	const found = await tickets.find(app.store.db, hashTicket(ticket), Date.now());
	if (found?.purpose !== purpose) return null;
	const person = await people.byId(app.store.db, found.personId);
	if (person === null || person.switchedOffAtMs !== null) return null;
	return { name: person.name, email: person.email };
}

export type PasswordTaken =
	{ ok: true } | { ok: false; reason: 'ticket' } | { ok: false; reason: 'password'; why: string };

type Event = Pick<RequestEvent, 'cookies' | 'getClientAddress' | 'url'>;

/** For the form actions of /invitation and /reset: sets the password, uses the link up, signs in. */
export async function takeTicket(
	event: Event,
	purpose: tickets.Purpose,
	form: { ticket: string; password: string }
): Promise<PasswordTaken> {
	const app = instance();
	const holder = await invitationHolder(form.ticket, purpose);
	if (holder === null) return { ok: false, reason: 'ticket' };
	const why = passwordProblem(form.password, holder);
	if (why !== null) return { ok: false, reason: 'password', why };
	const passwordHash = await hashPassword(form.password);
	const personId = await app.store.db.transaction(async (tx) => {
		const found = await tickets.find(tx, hashTicket(form.ticket), Date.now());
		if (found === null || !(await tickets.use(tx, found.hash, Date.now()))) return null;
		await people.setPassword(tx, found.personId, passwordHash);
		await audit.note(
			tx,
			{ actor: `person:${found.personId}`, what: `password.${purpose}`, subject: holder.email },
			Date.now()
		);
		return found.personId;
	});
	if (personId === null) return { ok: false, reason: 'ticket' };
	app.directory.invalidate();
	await startSession(app, event, personId);
	return { ok: true };
}
