import type { AuthenticateError, Client } from 'aedes';
import type { BrokerRefusal } from './counters';
import { sameSecret, type NodeDirectory } from './directory';
import { LINK_USER } from './link-codec';
import type { NodeLink, Role } from './node-link';
import { RateBucket } from './rate';

export const SERIAL = /^[A-Z0-9-]{4,32}$/;

/** MQTT 3.1.1, table 3.1: the return codes used here. */
const CODE = { identifier: 2, unavailable: 3, refused: 5 } as const;

export type SignIn = { ok: true; role: Role } | { ok: false; code: number; reason: BrokerRefusal };

export interface SignInRules {
	directory: NodeDirectory;
	linkSecret: string;
	ratePerS: number;
}

const no = (code: number, reason: BrokerRefusal): SignIn => ({ ok: false, code, reason });

/** Decides on a CONNECT by protocol.md, 'Transport'. Unknown serial and wrong password look the same. */
export function signIn(
	rules: SignInRules,
	link: Pick<NodeLink, 'will' | 'socket'>,
	given: { clientId: string; user: string | undefined; password: Uint8Array | undefined },
	nowMs: number
): SignIn {
	const { clientId, user } = given;
	const password = given.password ?? new Uint8Array();
	if (user === LINK_USER) {
		const allowed =
			clientId === LINK_USER &&
			isLoopback(link.socket.remoteAddress) &&
			sameSecret(password, rules.linkSecret);
		return allowed ? { ok: true, role: { kind: 'app' } } : no(CODE.refused, 'link');
	}
	if (!SERIAL.test(clientId)) return no(CODE.identifier, 'identifier');
	if (user !== clientId) return no(CODE.refused, 'identifier');
	const check = rules.directory.check(clientId, password, nowMs);
	if (!check.ok) {
		return check.reason === 'unavailable'
			? no(CODE.unavailable, 'unavailable')
			: no(CODE.refused, 'credentials');
	}
	const own = `lodekeep/1/${clientId}/up/`;
	if (link.will !== null && (link.will.topic !== `${own}gone` || link.will.qos > 1)) {
		return no(CODE.refused, 'will');
	}
	return {
		ok: true,
		role: {
			kind: 'node',
			serial: clientId,
			hash: check.hash,
			topicPrefix: Buffer.from(own),
			rate: new RateBucket(rules.ratePerS, nowMs)
		}
	};
}

/** The error aedes turns into a CONNACK. */
export const connackError = (code: number, reason: string): AuthenticateError =>
	Object.assign(new Error(reason), { returnCode: code });

/** Every connection of this broker is a NodeLink (start.ts hands aedes nothing else). */
export const linkOf = (client: Client): NodeLink => client.conn as NodeLink;

function isLoopback(address: string | undefined): boolean {
	const plain = (address ?? '').replace(/^::ffff:/i, '');
	return plain === '::1' || plain.startsWith('127.');
}
