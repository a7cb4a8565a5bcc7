import type { SkewWindow } from './skew';

/** Protocol, 'What the server does', step 4. */
export const CLOCK = {
	/** A clock before 2020-01-01 has never been set. */
	firstSaneMs: Date.UTC(2020, 0, 1),
	/** A last row further ahead of its arrival than this comes from a wrong clock. */
	aheadMs: 60_000,
	/** A skew beyond this either way is a clock that is off. */
	skewMs: 60_000,
	/** Rows older than this at arrival are stored but move no state. */
	oldestMovingMs: 14 * 86_400_000
} as const;

/** Bits of `reading.flags` (store/schema/node.ts). */
export const FLAG = { clipped: 1, shifted: 2, clockless: 4, unsigned: 8, unmoving: 16 } as const;

export interface MessageTime {
	/** The time of the message's `t` on the server's clock. */
	baseMs: number;
	/** Bits of FLAG but `clipped` and `unsigned`. */
	flags: number;
	/** What the message says of the node's clock; null = nothing. */
	clockOff: boolean | null;
}

export interface TimedMessage {
	/** 0 = no clock. */
	t: number;
	/** ms after `t` of the last row; 0 for a message without rows. */
	lastDtMs: number;
	/** Key 23, null when it did not come. */
	sentMs: number | null;
	/** Sent before one that is already heard (lower boot, or lower seq of the same boot). */
	behind: boolean;
	arrivedAtMs: number;
}

/** Shifted as a whole so that its last row is at arrival. */
function atArrival(message: TimedMessage, clockOff: boolean | null): MessageTime {
	const baseMs = message.arrivedAtMs - message.lastDtMs;
	const flag = message.t === 0 ? FLAG.clockless : FLAG.shifted;
	// Without a usable clock a straggler says nothing of when it was: it is kept and moves nothing.
	return { baseMs, flags: flag | (message.behind ? FLAG.unmoving : 0), clockOff };
}

/**
 * Puts a message on the server's clock. The skew, where known, is taken out first, so that a backlog
 * of a node whose clock is an hour ahead keeps its own spacing instead of all landing on its arrival.
 */
export function placeInTime(message: TimedMessage, skew: SkewWindow): MessageTime {
	if (message.t < CLOCK.firstSaneMs) return atArrival(message, message.t === 0 ? null : true);
	if (message.sentMs !== null) skew.note(message.arrivedAtMs, message.arrivedAtMs - message.sentMs);
	const least = message.sentMs === null ? null : skew.least(message.arrivedAtMs);
	const off = least !== null && Math.abs(least) > CLOCK.skewMs;
	const baseMs = message.t + (off ? least : 0);
	if (baseMs + message.lastDtMs > message.arrivedAtMs + CLOCK.aheadMs)
		return atArrival(message, true);
	const old = baseMs < message.arrivedAtMs - CLOCK.oldestMovingMs;
	return {
		baseMs,
		flags: (off ? FLAG.shifted : 0) | (old ? FLAG.unmoving : 0),
		clockOff: least === null ? goodIfRecent(message, baseMs) : off
	};
}

/** Without key 23 only a row about as old as its arrival clears a clock: a backlog says nothing of it. */
const goodIfRecent = (message: TimedMessage, baseMs: number): false | null =>
	baseMs + message.lastDtMs > message.arrivedAtMs - CLOCK.skewMs ? false : null;
