/** Frames as protocol.md names them, decoded and range-checked; counts are signed. */
export type Counts3 = readonly [number, number, number];

export interface FrameCommon {
	boot: number;
	seq: number;
	/** ms since the Unix epoch; 0 = the node has no clock. */
	t: number;
	/** Node's clock at first transmission (key 23). */
	sentMs: number | null;
	unsigned: boolean;
}

export interface BeforePulse {
	polarity: 1 | -1 | 0;
	counts: Counts3;
}

export interface ReadingFrame extends FrameCommon {
	kind: 'reading';
	rows: readonly { dtMs: number; counts: Counts3; tempDc: number | null }[];
	polarity: 1 | -1;
	tempDc: number | null;
	batteryMv: number | null;
	rssiDbm: number | null;
	pulse: { ageS: number; count: number } | null;
	tx: { frames: number; radioMs: number } | null;
}

export interface PairFrame extends FrameCommon {
	kind: 'pair';
	set: Counts3;
	reset: Counts3;
	before: BeforePulse | null;
	after: Counts3 | null;
	tempDc: number | null;
	batteryMv: number | null;
	commandId: Uint8Array | null;
	pulse: { ageS: number; count: number } | null;
	rssiDbm: number | null;
}

export interface HelloFrame extends FrameCommon {
	kind: 'hello';
	firmware: string | null;
	profile: string | null;
	cause: string | null;
	tempDc: number | null;
	batteryMv: number | null;
	before: BeforePulse | null;
	after: Counts3 | null;
	pulse: { ageS: number; count: number } | null;
	habit: { periodS: number; deltaMg: number } | null;
	tx: { frames: number; radioMs: number } | null;
	rssiDbm: number | null;
}

export interface AckFrame extends FrameCommon {
	kind: 'ack';
	commandId: Uint8Array;
	outcome: 0 | 1 | 2;
	reason: string | null;
	before: BeforePulse | null;
	after: Counts3 | null;
	pulse: { ageS: number; count: number } | null;
	habit: { periodS: number; deltaMg: number } | null;
	rssiDbm: number | null;
}

export type UpFrame = ReadingFrame | PairFrame | HelloFrame | AckFrame;

export interface CommandFrame {
	id: Uint8Array;
	verb: 'set' | 'reset' | 'pair' | 'report';
	boot: number;
	t: number;
	expiresMs: number;
	report: { periodS: number; deltaMg: number } | null;
}

/** The closed list of refusals of one message (protocol, 'What the server does'). */
export type Refusal =
	| 'too_large'
	| 'not_decodable'
	| 'wrong_type'
	| 'too_many_rows'
	| 'out_of_range'
	| 'unknown_serial'
	| 'bad_tag'
	| 'unsigned_not_allowed'
	| 'bad_topic'
	| 'withdrawn';

export type Opened<T> = { ok: true; frame: T } | { ok: false; reason: Refusal; detail: string };

/*
 * To be exported by wire/frames.ts (uses envelope.ts and topics.ts):
 *   openUp(topic, bytes, keys: Uint8Array[], opts: {unsignedAllowed, rangeCounts: {min, max}}): Opened<UpFrame>
 *   sealUp(topic, frame, key, alg): Uint8Array          (simulator and tests)
 *   sealCommand(topic, command, key): Uint8Array
 *   openCommand(topic, bytes, key): Opened<CommandFrame> (simulator)
 *   mqttPassword(key): string
 */
