import type { CommandRow } from '$lib/server/store/queries/commands';
import type { PulseRow } from '$lib/server/store/queries/pulses';
import type { ReadingRow } from '$lib/server/store/queries/readings';
import { MARK } from '$lib/server/store/queries/node-state';
import type { UpFrame } from '$lib/wire/types';
import { FLAG } from '../clock';
import type { Queued } from '../hosted-group';
import { inService, type NodeEntry } from '../node-entry';
import { eraAt } from '../order';
import { inOrder } from '../stored-stream';
import { addToHour, dayOf } from '../tally';
import type { Work } from '../work';
import type { CheckedMessage, FrameMessage } from './check';
import { ackPulse, helloPulse, pairPulse, pulseItem, readingRows, rowItem } from './convert';

/** Items for detection by node, in each node's order. */
export type ItemsByNode = Map<NodeEntry, Queued[]>;

/**
 * Turns what is new into rows to store and items for detection, and notes what the messages tell of
 * their nodes. `commands` are those that acks of this batch answer.
 */
export function gather(
	fresh: readonly CheckedMessage[],
	commands: ReadonlyMap<string, CommandRow>,
	work: Work
): ItemsByNode {
	const items: ItemsByNode = new Map();
	for (const checked of fresh) {
		noteNode(checked, work);
		const queued = takeFrame(checked, commands, work);
		const { entry } = checked;
		if (queued.length === 0 || !movesState(checked)) continue;
		const list = items.get(entry);
		if (list === undefined) items.set(entry, queued);
		else for (const one of queued) list.push(one);
	}
	for (const queued of items.values()) inOrder(queued);
	return items;
}

function movesState({ entry, time }: CheckedMessage): boolean {
	return inService(entry) && (time.flags & FLAG.unmoving) === 0;
}

function takeFrame(
	checked: CheckedMessage,
	commands: ReadonlyMap<string, CommandRow>,
	work: Work
): Queued[] {
	const { frame } = checked;
	switch (frame.kind) {
		case 'reading':
			return takeReading(checked, readingRows(checked, frame), work);
		case 'pair':
			if (frame.commandId !== null) answer(checked, frame.commandId, 0, null, work);
			return takePulse(checked, pairPulse(checked, frame), work);
		case 'hello':
			work.hellos.push({
				nodeId: checked.entry.id,
				boot: frame.boot,
				atMs: checked.time.baseMs,
				firmware: frame.firmware,
				profileCode: frame.profile,
				cause: frame.cause
			});
			return takePulse(checked, helloPulse(checked, frame), work);
		case 'ack': {
			answer(checked, frame.commandId, frame.outcome, frame.reason, work);
			const verb = commands.get(Buffer.from(frame.commandId).toString('hex'))?.verb;
			const fired = frame.outcome === 0 && (verb === 'set' || verb === 'reset');
			return fired ? takePulse(checked, ackPulse(checked, frame, verb), work) : [];
		}
	}
}

function answer(
	{ entry }: CheckedMessage,
	commandId: Uint8Array,
	outcome: 0 | 1 | 2,
	reason: string | null,
	work: Work
): void {
	work.answers.push({ nodeId: entry.id, commandId, outcome, reason });
}

const queuedOf = (
	checked: CheckedMessage,
	item: Queued['item'] & { boot: number; seq: number },
	row: number
): Queued => ({
	item,
	order: {
		era: eraAt(checked.entry.live.acceptedBootsMs, item.atMs),
		boot: item.boot,
		seq: item.seq,
		row
	},
	mergeAtMs: item.atMs,
	arrivedAtMs: checked.message.arrivedAtMs
});

function takeReading(checked: CheckedMessage, rows: readonly ReadingRow[], work: Work): Queued[] {
	const { live, config } = checked.entry;
	for (const row of rows) {
		work.readings.push(row);
		addToHour(work.hours, row);
		if (live.last === null || row.atMs >= live.last.atMs) {
			const { atMs, x, y, z, polarity } = row;
			live.last = { atMs, x, y, z, polarity };
			if (row.tempDc !== null) live.tempDc = row.tempDc;
		}
	}
	if (!movesState(checked)) return [];
	// What a node measured before it was placed says nothing of its bay.
	const inBay = rows.filter(({ atMs }) => atMs >= (config.placedAtMs ?? 0));
	return inBay.map((row) => queuedOf(checked, rowItem(row, config.profile), row.row));
}

function takePulse(checked: CheckedMessage, pulse: PulseRow, work: Work): Queued[] {
	work.pulses.push({ ...pulse, moving: (checked.time.flags & FLAG.unmoving) === 0 });
	return [queuedOf(checked, pulseItem(pulse, checked.entry.config.profile), 0)];
}

/** Whatever it says: the node is not silent. Whether its state is known again, its rows tell. */
function noteHeard(entry: NodeEntry, arrivedAtMs: number, work: Work): void {
	entry.live.heardAtMs = Math.max(entry.live.heardAtMs ?? 0, arrivedAtMs);
	entry.live.silence.silent = false;
	work.touched.add(entry);
}

/** Arrival, battery, signal, clock, counters: what the message tells beside its field. */
function noteNode({ message, entry, frame, time }: CheckedMessage, work: Work): void {
	const { live } = entry;
	noteHeard(entry, message.arrivedAtMs, work);
	if ('batteryMv' in frame && frame.batteryMv !== null) live.batteryMv = frame.batteryMv;
	if (frame.rssiDbm !== null) live.rssiDbm = frame.rssiDbm;
	if (time.clockOff !== null) setMark(entry, MARK.clockOff, time.clockOff);
	setMark(entry, MARK.unsigned, frame.unsigned);
	const day = dayOf(work.counts, entry.id, message.arrivedAtMs);
	day.messages += 1;
	if ('batteryMv' in frame && frame.batteryMv !== null)
		day.batteryMinMv = Math.min(day.batteryMinMv ?? frame.batteryMv, frame.batteryMv);
	noteCounters(entry, frame, day);
	noteFacts(entry, frame, work);
}

export function setMark(entry: NodeEntry, mark: number, on: boolean): void {
	entry.live.marks = on ? entry.live.marks | mark : entry.live.marks & ~mark;
}

/** Frames, radio time and pulses are counted by the node since its boot: the increase is what is new. */
function noteCounters(
	{ live }: NodeEntry,
	frame: UpFrame,
	day: { txFrames: number; txRadioMs: number; pulses: number }
): void {
	const tx = 'tx' in frame ? frame.tx : null;
	if (tx === null && frame.pulse === null) return;
	const known = live.tx?.boot === frame.boot ? live.tx : null;
	const now = {
		boot: frame.boot,
		frames: tx?.frames ?? known?.frames ?? 0,
		radioMs: tx?.radioMs ?? known?.radioMs ?? 0,
		pulses: frame.pulse?.count ?? known?.pulses ?? 0
	};
	// Without a former figure of this boot (after a start of the server) nothing can be called new.
	if (known !== null) {
		day.txFrames += Math.max(0, now.frames - known.frames);
		day.txRadioMs += Math.max(0, now.radioMs - known.radioMs);
		day.pulses += Math.max(0, now.pulses - known.pulses);
	}
	live.tx = now;
}

function noteFacts(entry: NodeEntry, frame: UpFrame, work: Work): void {
	if (frame.kind === 'hello' && frame.boot === entry.live.heardBoot) {
		if (frame.firmware !== null) work.fact(entry.id).firmware = frame.firmware;
		if (frame.cause !== null) work.fact(entry.id).bootCause = frame.cause;
	}
	const habit = 'habit' in frame ? frame.habit : null;
	if (habit === null || frame.boot !== entry.live.heardBoot) return;
	const { periodS, deltaMg } = habit;
	if (periodS === entry.config.periodS && deltaMg === entry.config.deltaMg) return;
	Object.assign(work.fact(entry.id), { periodS, deltaMg });
}

/** A duplicate was heard all the same. */
export function noteDuplicate({ message, entry }: FrameMessage, work: Work): void {
	noteHeard(entry, message.arrivedAtMs, work);
	dayOf(work.counts, entry.id, message.arrivedAtMs).duplicates += 1;
}
