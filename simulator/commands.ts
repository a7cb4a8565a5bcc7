import type { CommandFrame } from '$lib/wire/types';
import { firePulse, sendAck, type Out } from './node-frames';
import { ownBeatMs, setHabit } from './node';
import type { NodeState } from './node-state';

/** What a node remembers of a command it has obeyed; kept over a reboot (protocol, `down`). */
export interface Obeyed {
	idHex: string;
	outcome: 0 | 1 | 2;
	reason: string | null;
}

export const REMEMBERED = 16;
/** Under this the cell cannot drive a pulse, mV. */
const PULSE_FLOOR_MV = 2500;
/** What a node can keep to, so that a command never leaves it mute or empties its cell. */
const PERIOD_S = { least: 1, most: 86_400 };

const hexOf = (id: Uint8Array): string => Buffer.from(id).toString('hex');

/** Why a command that opened and is signed is not for obeying; null = obey. */
export function notForObeying(
	node: NodeState,
	command: CommandFrame,
	nowMs: number
): 'another boot' | 'expired' | null {
	if (command.boot !== node.boot) return 'another boot';
	const { clockOffsetMs } = node.config;
	// Without a clock the boot alone guards against old commands (protocol, `down`).
	if (clockOffsetMs !== null && command.expiresMs < nowMs + clockOffsetMs) return 'expired';
	return null;
}

/** Refusal of a command that is in order, in words for the ack. */
function refusal(command: CommandFrame, batteryMv: number): string | null {
	if (command.verb === 'report') {
		const periodS = command.report?.periodS ?? 0;
		return periodS >= PERIOD_S.least && periodS <= PERIOD_S.most ? null : 'period out of range';
	}
	return batteryMv < PULSE_FLOOR_MV ? 'cell too low for a pulse' : null;
}

/**
 * Takes a command as protocol.md says: not obeyed when expired or for another boot; answered again
 * with the same outcome when its id is known; else remembered before the pulse is fired, done, answered.
 * `remember` must have stored the list before it returns.
 */
export function takeCommand(
	node: NodeState,
	known: Obeyed[],
	command: CommandFrame,
	nowMs: number,
	batteryMv: number,
	remember: (known: Obeyed[]) => void,
	out: Out
): void {
	const idHex = hexOf(command.id);
	const before = known.find((obeyed) => obeyed.idHex === idHex);
	if (before !== undefined) {
		const { outcome, reason } = before;
		sendAck(node, nowMs, command.id, { outcome, reason, before: null, after: null }, out);
		return;
	}
	if (notForObeying(node, command, nowMs) !== null) return;
	const reason = refusal(command, batteryMv);
	const outcome = reason === null ? 0 : 1;
	known.push({ idHex, outcome, reason });
	known.splice(0, Math.max(0, known.length - REMEMBERED));
	remember(known);
	const pulse = reason === null ? obey(node, command, nowMs, out) : null;
	sendAck(node, nowMs, command.id, { outcome, reason, ...(pulse ?? NO_PULSE) }, out);
}

const NO_PULSE = { before: null, after: null };

function obey(node: NodeState, command: CommandFrame, nowMs: number, out: Out) {
	if (command.verb === 'report') {
		if (command.report === null) return null;
		setHabit(node, command.report, nowMs);
		node.heartbeatMs = ownBeatMs(node.config.serial, command.report.periodS, nowMs);
		return null;
	}
	if (command.verb === 'pair') {
		firePulse(node, 'pair', nowMs, command.id, out);
		// Before and after stand in the pair itself (protocol keys 20 and 21).
		return null;
	}
	return firePulse(node, command.verb, nowMs, null, out);
}
