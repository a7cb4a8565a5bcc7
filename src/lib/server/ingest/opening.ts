import type { Room } from './batch';
import type { HeldMessage } from './subscriber-types';
import { open, type OpenedMessage } from './steps/open';

/** A node's key does not open under this installation's secret: nothing is acknowledged until it does. */
export class KeyUnreadable extends Error {
	constructor(readonly serial: string) {
		super(`The key of node ${serial} cannot be opened with this LODEKEEP_SECRET.`);
	}
}

/** How soon the same unknown serial or badly signing node is looked up again. */
const LOOK_AGAIN_MS = 2_000;
const lookedUp = new WeakMap<Room, Map<string, number>>();

function mayLookUp(room: Room, name: string, nowMs: number): boolean {
	let known = lookedUp.get(room);
	if (known === undefined) lookedUp.set(room, (known = new Map<string, number>()));
	if (nowMs - (known.get(name) ?? 0) < LOOK_AGAIN_MS) return false;
	// Serials come from outside: the map is bounded by starting anew.
	if (known.size > 20_000) known.clear();
	known.set(name, nowMs);
	return true;
}

/**
 * Opens messages. A serial not in memory and a tag that fits no key are looked up in the database
 * first: the node may have been registered, placed or given a new key a moment ago.
 */
export async function openAll(
	room: Room,
	messages: readonly HeldMessage[],
	nowMs: number
): Promise<OpenedMessage[]> {
	const { registry } = room;
	const unknown = new Set<string>();
	for (const { serial } of messages)
		if (registry.bySerial(serial) === undefined && mayLookUp(room, serial, nowMs))
			unknown.add(serial);
	if (unknown.size > 0) await reload(room, [...unknown], nowMs);
	const opened = messages.map((message) => open(message, registry));
	const doubtful = new Set<string>();
	for (const one of opened)
		if (isDoubtful(one) && mayLookUp(room, one.message.serial, nowMs))
			doubtful.add(one.message.serial);
	if (doubtful.size > 0) {
		await reload(room, [...doubtful], nowMs);
		opened.forEach((one, i) => {
			if (doubtful.has(one.message.serial)) opened[i] = open(one.message, registry);
		});
	}
	const unreadable = opened.find((one) => one.kind === 'unreadable');
	if (unreadable !== undefined) throw new KeyUnreadable(unreadable.message.serial);
	return opened;
}

/** What a fresh look at the registration might turn into a good message. */
const isDoubtful = (one: OpenedMessage): boolean =>
	one.kind === 'unreadable' ||
	(one.kind === 'rejected' &&
		['bad_tag', 'withdrawn', 'unsigned_not_allowed', 'out_of_range'].includes(one.reason));

async function reload(room: Room, serials: readonly string[], nowMs: number): Promise<void> {
	await room.registry.loadSome(room.pool, { serials }, nowMs);
}
