import type { Config } from '$lib/server/config';
import { holderName, isGone } from '$lib/server/ingest/holder';
import { periodic } from '$lib/server/ingest/periodic';
import type { Log } from '$lib/server/log';
import type { Secret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import * as lease from '$lib/server/store/queries/lease';
import * as mailPeople from '$lib/server/store/queries/mail-people';
import * as looks from '$lib/server/store/queries/notice-look';
import { composeDue } from './compose-mail';
import { DriftFacts } from './drift-facts';
import { escalateOverdue } from './escalate';
import { lookAt, worthALook } from './look';
import { lookAtMail } from './mail-trouble';
import { recipientOf } from './people';

export const NOTICES_LEASE = 'notices';
const LEASE_EVERY_MS = 5_000;
const LOOK_EVERY_MS = 5_000;
const MAIL_EVERY_MS = 2_000;

export interface NoticeWorker {
	/** Somebody did something: mails that follow are composed now. */
	nudge(): void;
	close(): Promise<void>;
}

export interface WorkerParts {
	store: Store;
	secret: Secret;
	log: Log;
	config: Pick<Config, 'origin' | 'host' | 'port' | 'tls'>;
	/** Something stands in the outbox. */
	wake: () => void;
}

/** Where links lead when ORIGIN is not given (the launcher gives it wherever no proxy says otherwise). */
export function linkBase({ origin, host, port, tls }: WorkerParts['config']): string {
	return origin ?? `${tls === null ? 'http' : 'https'}://${host}:${port}`;
}

/** One round: every site whose log moved or whose time has come, mail troubles, what nobody took. */
export async function lookRound(
	store: Store,
	drift: DriftFacts,
	listensSinceMs: number,
	nowMs: number
): Promise<void> {
	const people = (await mailPeople.all(store.pool)).map(recipientOf);
	const sites = await looks.sites(store.pool);
	for (const site of sites)
		if (worthALook(site, nowMs))
			await lookAt({ store, people, nowMs, listensSinceMs, drift }, site);
	await lookAtMail(store, people, nowMs);
	const zones = new Map(sites.map(({ id, timezone }) => [id, timezone]));
	const zoneOf = (siteId: number | null) => zones.get(siteId ?? 0) ?? 'UTC';
	while ((await escalateOverdue(store, people, zoneOf, nowMs)) > 0);
}

/** Keeps notices and their mails; one copy of a deployment works, the others wait for its lease. */
export function startNotices(parts: WorkerParts): NoticeWorker {
	const { store, secret, log } = parts;
	const holder = holderName();
	const listensSinceMs = Date.now();
	const drift = new DriftFacts();
	let mine = false;
	const leaseWork = periodic('notices lease', LEASE_EVERY_MS, log, async () => {
		mine = await lease.hold(store.pool, NOTICES_LEASE, holder);
		const other = mine ? null : await lease.holderOf(store.pool, NOTICES_LEASE);
		if (other !== null && isGone(other))
			await lease.takeOver(store.pool, NOTICES_LEASE, other, holder);
	});
	const lookWork = periodic('notices', LOOK_EVERY_MS, log, async () => {
		if (mine) await lookRound(store, drift, listensSinceMs, Date.now());
	});
	const mailWork = periodic('notice mails', MAIL_EVERY_MS, log, async () => {
		if (!mine) return;
		let composed = 0;
		const composeParts = { store, secret, origin: linkBase(parts.config) };
		do {
			composed = await composeDue(composeParts, Date.now());
			if (composed > 0) parts.wake();
		} while (composed > 0);
	});
	leaseWork.now();
	return {
		nudge: () => {
			mailWork.now();
		},
		close: async () => {
			await Promise.all([leaseWork.close(), lookWork.close(), mailWork.close()]);
			await lease.release(store.pool, NOTICES_LEASE, holder).catch(() => undefined);
		}
	};
}
