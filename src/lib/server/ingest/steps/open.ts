import { openUp } from '$lib/wire/frames';
import { parseUpTopic } from '$lib/wire/topics';
import type { Refusal, UpFrame } from '$lib/wire/types';
import type { NodeEntry } from '../node-entry';
import type { Registry } from '../registry';
import type { HeldMessage } from '../subscriber-types';

export type OpenedMessage =
	| { kind: 'frame'; message: HeldMessage; entry: NodeEntry; frame: UpFrame }
	| {
			kind: 'rejected';
			message: HeldMessage;
			entry: NodeEntry | null;
			reason: Refusal;
			detail: string;
	  }
	/** The last will: a hint, never proof (protocol, 'Topics'). */
	| { kind: 'gone'; message: HeldMessage }
	/** The node's key will not open under this installation's secret: no rejection, but a stop. */
	| { kind: 'unreadable'; message: HeldMessage; entry: NodeEntry };

const rejected = (
	message: HeldMessage,
	entry: NodeEntry | null,
	reason: Refusal,
	detail: string
): OpenedMessage => ({ kind: 'rejected', message, entry, reason, detail });

/** Opens one message (protocol, server steps 1 and 2). */
export function open(message: HeldMessage, registry: Registry): OpenedMessage {
	const topic = parseUpTopic(message.topic);
	if (topic === null) return rejected(message, null, 'bad_topic', message.topic.slice(0, 80));
	if (topic.kind === 'gone') return { kind: 'gone', message };
	const entry = registry.bySerial(topic.serial);
	if (entry === undefined) return rejected(message, null, 'unknown_serial', topic.serial);
	const { config } = entry;
	if (config.withdrawnAtMs !== null)
		return rejected(message, entry, 'withdrawn', 'The node is out of service.');
	if (config.keys === null) return { kind: 'unreadable', message, entry };
	const opened = openUp(message.topic, message.bytes, config.keys, {
		unsignedAllowed: config.unsignedAllowed,
		rangeCounts: config.range
	});
	return opened.ok
		? { kind: 'frame', message, entry, frame: opened.frame }
		: rejected(message, entry, opened.reason, opened.detail);
}
