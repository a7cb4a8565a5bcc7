import { writeCbor, type Writable } from './cbor-write';
import { sealEnvelope, type FrameAlg } from './envelope';
import { KEY, type FieldName } from './fields';
import type { BeforePulse, FrameCommon, ReadingFrame, UpFrame } from './types';

type Named = Partial<Record<FieldName, Writable | null>>;

const beforeList = (before: BeforePulse | null): Writable | null =>
	before === null ? null : [before.polarity, ...before.counts];
const pulseList = (pulse: { ageS: number; count: number } | null): Writable | null =>
	pulse === null ? null : [pulse.ageS, pulse.count];
const txList = (tx: { frames: number; radioMs: number } | null): Writable | null =>
	tx === null ? null : [tx.frames, tx.radioMs];
export const habitMap = (habit: { periodS: number; deltaMg: number } | null): Writable | null =>
	habit === null
		? null
		: new Map([
				['period_s', habit.periodS],
				['delta_mg', habit.deltaMg]
			]);

function tempsList(rows: ReadingFrame['rows']): Writable | null {
	const temps: number[] = [];
	for (const row of rows) {
		if (row.tempDc === null) return null;
		temps.push(row.tempDc);
	}
	return temps;
}

function commonFields(frame: FrameCommon): Named {
	return { boot: frame.boot, seq: frame.seq, t: frame.t, sent: frame.sentMs };
}

/** A frame's fields by protocol name; null = not sent. */
function named(frame: UpFrame): Named {
	switch (frame.kind) {
		case 'reading':
			return {
				...commonFields(frame),
				rows: frame.rows.map((row) => [row.dtMs, ...row.counts]),
				polarity: frame.polarity,
				temp: frame.tempDc,
				battery: frame.batteryMv,
				rssi: frame.rssiDbm,
				pulse: pulseList(frame.pulse),
				temps: tempsList(frame.rows),
				tx: txList(frame.tx)
			};
		case 'pair':
			return {
				...commonFields(frame),
				temp: frame.tempDc,
				battery: frame.batteryMv,
				rssi: frame.rssiDbm,
				set: frame.set,
				reset: frame.reset,
				command: frame.commandId,
				before: beforeList(frame.before),
				after: frame.after,
				pulse: pulseList(frame.pulse)
			};
		case 'hello':
			return {
				...commonFields(frame),
				temp: frame.tempDc,
				battery: frame.batteryMv,
				rssi: frame.rssiDbm,
				firmware: frame.firmware,
				profile: frame.profile,
				cause: frame.cause,
				before: beforeList(frame.before),
				after: frame.after,
				pulse: pulseList(frame.pulse),
				habit: habitMap(frame.habit),
				tx: txList(frame.tx)
			};
		case 'ack':
			return {
				...commonFields(frame),
				rssi: frame.rssiDbm,
				command: frame.commandId,
				outcome: frame.outcome,
				reason: frame.reason,
				before: beforeList(frame.before),
				after: frame.after,
				pulse: pulseList(frame.pulse),
				habit: habitMap(frame.habit)
			};
	}
}

/** Fields as the protocol's map, integer keys rising, nulls left out. */
export function payloadOf(fields: Named): Uint8Array {
	const entries: [number, Writable][] = [];
	for (const [name, value] of Object.entries(fields)) {
		if (value !== null) entries.push([KEY[name as FieldName], value]);
	}
	return writeCbor(new Map(entries.sort((a, b) => a[0] - b[0])));
}

/** What a node sends: for the simulator and tests. */
export function sealUp(
	topic: string,
	frame: UpFrame,
	key: Uint8Array,
	alg: FrameAlg = 5
): Uint8Array {
	return sealEnvelope(topic, payloadOf(named(frame)), key, alg);
}

function asJson(value: Writable | null): unknown {
	if (value instanceof Uint8Array) return Buffer.from(value).toString('hex');
	if (value instanceof Map) return Object.fromEntries(value as Map<string, Writable>);
	return value;
}

/** The JSON twin of a frame. */
export function sealUnsigned(frame: UpFrame): Uint8Array {
	const entries = Object.entries(named(frame)).filter(([, value]) => value !== null);
	const json = Object.fromEntries(entries.map(([name, value]) => [name, asJson(value)]));
	return new TextEncoder().encode(JSON.stringify(json));
}
