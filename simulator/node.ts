import type { Counts3 } from '$lib/wire/types';
import { ageFilm, strikeFilm, type NodeEvent } from './film';
import { nextMotionMs, rotationOf } from './node-field';
import { bootUp, firePulse, flush, sendAck, type Out } from './node-frames';
import { apartMg, sample } from './node-sample';
import type { NodeState } from './node-state';

/** Protocol, 'Reporting habit': fast until the field has been still for this long. */
const STILL_MS = 5000;
const AFTER_EVENT_FINE_MS = 2000;

/** True while the node must look at the field several times a second. */
const isFine = (node: NodeState): boolean =>
	node.burst !== null || node.field.waking > 0 || node.atMs < node.fineUntilMs;

function nextAtMs(node: NodeState): number {
	const event = node.config.events[node.eventNext]?.atMs ?? Infinity;
	const look = isFine(node)
		? node.sampledMs + 1000 / node.config.burstHz
		: nextMotionMs(node.field);
	return Math.min(node.heartbeatMs, event, Math.max(look, node.atMs));
}

function randomId(node: NodeState): Uint8Array {
	return Uint8Array.from({ length: 8 }, () => node.rng.whole(0, 255));
}

/** An event of a time when the node was off is felt when it is on again. */
function befall(node: NodeState, event: NodeEvent, out: Out): void {
	const atMs = node.atMs;
	ageFilm(node.film, atMs);
	strikeFilm(node.film, event);
	if (event.kind === 'surroundings') {
		event.byMg.forEach((by, axis) => (node.field.surroundingsMg[axis]! += by));
	} else if (event.kind === 'tilt') {
		const { headingDeg, rollDeg, pitchDeg } = node.field.pose;
		node.field.pose = {
			headingDeg,
			rollDeg: rollDeg + event.rollDeg,
			pitchDeg: pitchDeg + event.pitchDeg
		};
		node.field.rotation = rotationOf(node.field.pose);
	} else if (event.kind === 'pulse') {
		const fired = firePulse(node, event.verb, atMs, null, out);
		if (event.verb !== 'pair') {
			const answer = { outcome: 0 as const, reason: null, ...fired };
			sendAck(node, atMs, randomId(node), answer, out);
		}
		return;
	} else if (event.kind === 'reboot') {
		flush(node, atMs, out);
		const upMs = atMs + event.offMs;
		node.atMs = upMs;
		bootUp(node, upMs, event.cause, out);
		return;
	}
	const lastsMs = event.kind === 'magnet' ? event.durationMs : 0;
	node.fineUntilMs = atMs + lastsMs + AFTER_EVENT_FINE_MS;
}

/** Follows a burst: starts it past delta, ends it when the field was still for 5 s. True = this sample is published. */
function inBurst(node: NodeState, atMs: number, counts: Counts3): boolean {
	const { burst, habit } = node;
	if (burst === null) {
		if (apartMg(node, counts, node.published) <= habit.deltaMg) return false;
		node.burst = { anchor: counts, stillSinceMs: atMs };
		return true;
	}
	if (apartMg(node, counts, burst.anchor) > habit.deltaMg) {
		burst.anchor = counts;
		burst.stillSinceMs = atMs;
	}
	if (atMs - burst.stillSinceMs >= STILL_MS) node.burst = null;
	return true;
}

function look(node: NodeState, atMs: number, out: Out): void {
	const { batching } = node.config;
	const due = atMs >= node.heartbeatMs;
	const counts = sample(node, atMs);
	node.sampledMs = atMs;
	const fast = inBurst(node, atMs, counts);
	if (due) node.heartbeatMs += node.habit.periodS * 1000;
	if (!due && !fast) return;
	node.published = counts;
	if (node.pending.length === 0) node.pendingFromMs = atMs;
	const oldMs = atMs - node.pendingFromMs;
	node.pending.push({ dtMs: oldMs, counts, tempDc: node.tempDc });
	// A lone heartbeat goes out at once unless the node gathers rows over more than a period.
	const lone = node.burst === null && batching.holdMs < node.habit.periodS * 1000;
	if (lone || node.pending.length >= batching.rows || oldMs >= batching.holdMs) {
		flush(node, atMs, out);
	}
}

/** Lets a node live until a time; what it sends goes to `out` in the order in which it sent it. */
export function advanceNode(node: NodeState, toMs: number, out: Out): void {
	for (;;) {
		const next = nextAtMs(node);
		if (next > toMs) break;
		const event = node.config.events[node.eventNext];
		if (event !== undefined && event.atMs <= next) {
			node.eventNext++;
			node.atMs = Math.max(node.atMs, event.atMs);
			befall(node, event, out);
			continue;
		}
		// Whole milliseconds, rising: the wire's dt knows nothing finer (protocol key 4).
		node.atMs = Math.max(Math.ceil(next), Math.ceil(node.sampledMs + 1));
		look(node, node.atMs, out);
	}
}

/** Changes how the node reports (verb `report`): from now on. */
export function setHabit(node: NodeState, habit: NodeState['habit'], atMs: number): void {
	node.habit = habit;
	node.heartbeatMs = Math.round(atMs + habit.periodS * 1000);
}

/** The next heartbeat of a node that keeps a phase of its own: a fleet told at one moment does not beat as one. */
export function ownBeatMs(serial: string, periodS: number, atMs: number): number {
	let phase = 0;
	for (const letter of serial) phase = (phase * 31 + letter.charCodeAt(0)) % 997;
	const periodMs = periodS * 1000;
	return Math.round(atMs + (periodMs * (1 + ((phase * 7) % 997))) / 997);
}
