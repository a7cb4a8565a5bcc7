import { readWhole, type CborMap, type CborValue } from './cbor-read';
import { MAX_MESSAGE_BYTES, openEnvelope } from './envelope';
import {
	attempt,
	counts3,
	Fields,
	INT16,
	integer,
	integerKeyed,
	list,
	Refused,
	UINT16,
	UINT32,
	UINT53,
	type Limits
} from './fields';
import { isJson, jsonFields } from './json-twin';
import { parseUpTopic, type UpKind } from './topics';
import type {
	AckFrame,
	FrameCommon,
	HelloFrame,
	Opened,
	PairFrame,
	ReadingFrame,
	Refusal,
	UpFrame
} from './types';

export { mqttPassword } from './envelope';
export { openCommand, sealCommand } from './command';
export { sealUnsigned, sealUp } from './seal';

export interface OpenOptions {
	/** The node's registration says that the JSON twin may be taken. */
	unsignedAllowed: boolean;
	/** Signed counts that the node's sensor profile can produce. */
	rangeCounts: Limits;
}

const MAX_ROWS = 120;
const DT: Limits = { min: 0, max: 86_400_000 };
const OUTCOME: Limits = { min: 0, max: 2 };
/** What is kept of texts (columns of `boot` and `command`). */
const CHARS = { firmware: 64, profile: 32, cause: 64, reason: 200 };

function common(fields: Fields, unsigned: boolean): FrameCommon {
	return {
		boot: fields.integer('boot', UINT32),
		seq: fields.integer('seq', UINT32),
		t: fields.integer('t', UINT53),
		sentMs: fields.optionalInteger('sent', UINT53),
		unsigned
	};
}

/** Key 24: one temperature a row, or none at all. */
function rowTemps(fields: Fields, rows: number): readonly CborValue[] | null {
	const temps = fields.raw('temps');
	return temps === undefined ? null : list(temps, 'temps', rows);
}

function readRows(fields: Fields): ReadingFrame['rows'] {
	const raw = list(fields.required('rows'), 'rows');
	if (raw.length === 0) throw new Refused('wrong_type', 'rows is empty');
	if (raw.length > MAX_ROWS) throw new Refused('too_many_rows', `${raw.length} rows`);
	const temps = rowTemps(fields, raw.length);
	let lastDt = -1;
	return raw.map((item, i) => {
		const row = list(item, 'row', 4);
		const dtMs = integer(row[0], 'dt', DT);
		if (dtMs <= lastDt) throw new Refused('out_of_range', `dt ${dtMs} does not rise`);
		lastDt = dtMs;
		const tempDc = temps === null ? null : integer(temps[i], 'temps', INT16);
		return { dtMs, counts: counts3(row, 1, 'counts', fields.range), tempDc };
	});
}

function readingFrame(fields: Fields, unsigned: boolean): ReadingFrame {
	return {
		kind: 'reading',
		...common(fields, unsigned),
		rows: readRows(fields),
		polarity: fields.polarity(),
		tempDc: fields.optionalInteger('temp', INT16),
		batteryMv: fields.optionalInteger('battery', UINT16),
		rssiDbm: fields.optionalInteger('rssi', INT16),
		pulse: fields.pulse(),
		tx: fields.tx()
	};
}

function pairFrame(fields: Fields, unsigned: boolean): PairFrame {
	return {
		kind: 'pair',
		...common(fields, unsigned),
		set: fields.counts('set'),
		reset: fields.counts('reset'),
		before: fields.before(),
		after: fields.optionalCounts('after'),
		tempDc: fields.optionalInteger('temp', INT16),
		batteryMv: fields.optionalInteger('battery', UINT16),
		commandId: fields.optionalCommandId(),
		pulse: fields.pulse(),
		rssiDbm: fields.optionalInteger('rssi', INT16)
	};
}

function helloFrame(fields: Fields, unsigned: boolean): HelloFrame {
	return {
		kind: 'hello',
		...common(fields, unsigned),
		firmware: fields.optionalText('firmware', CHARS.firmware),
		profile: fields.optionalText('profile', CHARS.profile),
		cause: fields.optionalText('cause', CHARS.cause),
		tempDc: fields.optionalInteger('temp', INT16),
		batteryMv: fields.optionalInteger('battery', UINT16),
		before: fields.before(),
		after: fields.optionalCounts('after'),
		pulse: fields.pulse(),
		habit: fields.habit('habit'),
		tx: fields.tx(),
		rssiDbm: fields.optionalInteger('rssi', INT16)
	};
}

function ackFrame(fields: Fields, unsigned: boolean): AckFrame {
	return {
		kind: 'ack',
		...common(fields, unsigned),
		commandId: fields.commandId(),
		outcome: fields.integer('outcome', OUTCOME) as 0 | 1 | 2,
		reason: fields.optionalText('reason', CHARS.reason),
		before: fields.before(),
		after: fields.optionalCounts('after'),
		pulse: fields.pulse(),
		habit: fields.habit('habit'),
		rssiDbm: fields.optionalInteger('rssi', INT16)
	};
}

const BUILD = {
	reading: readingFrame,
	pair: pairFrame,
	hello: helloFrame,
	ack: ackFrame
} as const;

const refused = (reason: Refusal, detail: string) => ({ ok: false, reason, detail }) as const;

function openFields(
	kind: Exclude<UpKind, 'gone'>,
	fields: () => CborMap,
	range: Limits,
	unsigned: boolean
): Opened<UpFrame> {
	return attempt<UpFrame>(() => BUILD[kind](new Fields(fields(), range), unsigned));
}

/**
 * Opens one message of a node (protocol.md, 'What the server does', steps 1 and 2), never throwing on
 * whatever bytes. Keys that the protocol does not name, or names for another kind of message, are
 * ignored, so that a later firmware may add some; keys that are absent though optional become null.
 * Key 6 and 7 count as optional too: a node whose thermometer fails still tells its field.
 */
export function openUp(
	topic: string,
	bytes: Uint8Array,
	keys: readonly Uint8Array[],
	opts: OpenOptions
): Opened<UpFrame> {
	const where = parseUpTopic(topic);
	if (where === null || where.kind === 'gone') return refused('bad_topic', topic.slice(0, 80));
	if (isJson(bytes)) {
		if (bytes.length > MAX_MESSAGE_BYTES) return refused('too_large', `${bytes.length} bytes`);
		if (!opts.unsignedAllowed) return refused('unsigned_not_allowed', 'JSON from this node');
		return openFields(where.kind, () => jsonFields(bytes), opts.rangeCounts, true);
	}
	const envelope = openEnvelope(topic, bytes, keys);
	if (!envelope.ok) return envelope;
	const fields = () => integerKeyed(readWhole(envelope.payload));
	return openFields(where.kind, fields, opts.rangeCounts, false);
}
