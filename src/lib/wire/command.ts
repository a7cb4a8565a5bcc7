import { readWhole } from './cbor-read';
import { openEnvelope, sealEnvelope } from './envelope';
import { attempt, Fields, integerKeyed, Refused, textOf, UINT32, UINT53 } from './fields';
import { habitMap, payloadOf } from './seal';
import { parseDownTopic } from './topics';
import type { CommandFrame, Opened } from './types';

const VERBS = ['set', 'reset', 'pair', 'report'] as const;
/** A command holds no counts. */
const NO_COUNTS = { min: 0, max: 0 };

/** A command for a node's `down` topic. */
export function sealCommand(topic: string, command: CommandFrame, key: Uint8Array): Uint8Array {
	const payload = payloadOf({
		boot: command.boot,
		t: command.t,
		command: command.id,
		verb: command.verb,
		args: habitMap(command.report),
		expires: command.expiresMs
	});
	return sealEnvelope(topic, payload, key, 5);
}

function readCommand(fields: Fields): CommandFrame {
	const said = textOf(fields.required('verb'), 'verb', 16);
	const verb = VERBS.find((known) => known === said);
	if (verb === undefined) throw new Refused('wrong_type', 'verb not known');
	const report = verb === 'report' ? fields.habit('args') : null;
	if (verb === 'report' && report === null) throw new Refused('wrong_type', 'args missing');
	return {
		id: fields.commandId(),
		verb,
		boot: fields.integer('boot', UINT32),
		t: fields.integer('t', UINT53),
		expiresMs: fields.integer('expires', UINT53),
		report
	};
}

/** What a node does with the bytes of its `down` topic; whether to obey (boot, expiry, id) is its own affair. */
export function openCommand(
	topic: string,
	bytes: Uint8Array,
	key: Uint8Array
): Opened<CommandFrame> {
	if (parseDownTopic(topic) === null)
		return { ok: false, reason: 'bad_topic', detail: topic.slice(0, 80) };
	const envelope = openEnvelope(topic, bytes, [key]);
	if (!envelope.ok) return envelope;
	return attempt(() =>
		readCommand(new Fields(integerKeyed(readWhole(envelope.payload)), NO_COUNTS))
	);
}
