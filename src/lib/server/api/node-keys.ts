import { createHash, randomBytes } from 'node:crypto';
import { mqttPassword } from '$lib/wire/frames';
import type { Instance } from './instance';

export interface NodeKey {
	key: Buffer;
	mqttPassword: string;
	mqttHash: Buffer;
}

/** A node's key as given (64 hex digits) or made here, with what follows from it (protocol, 'Transport'). */
export function nodeKey(hex: string | undefined): NodeKey {
	const key = hex === undefined ? randomBytes(32) : Buffer.from(hex, 'hex');
	const password = mqttPassword(key);
	return {
		key,
		mqttPassword: password,
		mqttHash: createHash('sha256').update(password).digest()
	};
}

/** Sealed and bound to the node's id: a sealed key moved to another row opens nothing. */
export const sealNodeKey = (app: Instance, nodeId: number, key: Buffer): Buffer =>
	app.secret.seal('node key', nodeId, key);

/** What is shown this once. */
export const shownKey = (serial: string, k: NodeKey) => ({
	serial,
	key: k.key.toString('hex'),
	mqttPassword: k.mqttPassword
});
