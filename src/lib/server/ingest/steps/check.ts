import type { Block } from '$lib/server/store/queries/received';
import type { UpFrame } from '$lib/wire/types';
import { placeInTime, type MessageTime } from '../clock';
import type { NodeEntry, NodeLive } from '../node-entry';
import type { SeenBlocks } from '../seen-blocks';
import type { HeldMessage } from '../subscriber-types';

export interface FrameMessage {
	message: HeldMessage;
	entry: NodeEntry;
	frame: UpFrame;
}

export interface CheckedMessage extends FrameMessage {
	time: MessageTime;
}

export interface Checked {
	fresh: CheckedMessage[];
	duplicates: FrameMessage[];
	/** Blocks of `received` as they are to be stored, each once. */
	blocks: Block[];
}

const lastDtMs = (frame: UpFrame): number =>
	frame.kind === 'reading' ? (frame.rows.at(-1)?.dtMs ?? 0) : 0;

/**
 * Parts duplicates from what is new and puts the new on the server's clock (protocol, server steps 3
 * and 4). Notes in memory what it takes; after an error that memory is dropped and read again.
 */
export function check(messages: readonly FrameMessage[], seen: SeenBlocks): Checked {
	const fresh: CheckedMessage[] = [];
	const duplicates: FrameMessage[] = [];
	const blocks = new Set<Block>();
	for (const one of messages) {
		const id = { nodeId: one.entry.id, boot: one.frame.boot, seq: one.frame.seq };
		if (seen.isStored(id)) {
			duplicates.push(one);
			continue;
		}
		blocks.add(seen.note(id));
		fresh.push({ ...one, time: timeOf(one) });
	}
	return { fresh, duplicates, blocks: [...blocks] };
}

/** Notes how far a node is heard; true = this message was sent before one that is already heard. */
function isBehind(live: NodeLive, { boot, seq }: UpFrame): boolean {
	const newBoot = live.heardBoot === null || boot > live.heardBoot;
	if (!newBoot && (boot < (live.heardBoot ?? 0) || seq < live.heardSeq)) return true;
	live.heardBoot = boot;
	live.heardSeq = seq;
	return false;
}

function timeOf({ message, entry, frame }: FrameMessage): MessageTime {
	const { live } = entry;
	const behind = isBehind(live, frame);
	return placeInTime(
		{
			t: frame.t,
			lastDtMs: lastDtMs(frame),
			sentMs: frame.sentMs,
			behind,
			arrivedAtMs: message.arrivedAtMs
		},
		live.skew
	);
}
