import type { ReadingFrame, UpFrame } from '$lib/wire/types';
import type { Sent } from './node-state';

/** A column that grows by doubling. */
interface Column<T extends { length: number; set(from: T): void }> {
	make: (length: number) => T;
	values: T;
}

const column = <T extends { length: number; set(from: T): void }>(
	make: (length: number) => T
): Column<T> => ({ make, values: make(1024) });

function room<T extends { length: number; set(from: T): void }>(col: Column<T>, count: number): T {
	if (count > col.values.length) {
		const wider = col.make(Math.max(count, col.values.length * 2));
		wider.set(col.values);
		col.values = wider;
	}
	return col.values;
}

/**
 * All messages of a node in columns: millions of small objects that live through a bench would spend
 * most of its time in the garbage collector.
 */
export interface MessageLog {
	count: number;
	sentAtMs: Column<Float64Array>;
	firstAtMs: Column<Float64Array>;
	boot: Column<Uint32Array>;
	seq: Column<Uint32Array>;
	polarity: Column<Int8Array>;
	tempDc: Column<Int16Array>;
	batteryMv: Column<Uint16Array>;
	/** First row of each message; its last is before the next one's first. */
	rowFrom: Column<Uint32Array>;
	rowCount: Column<Uint8Array>;
	rows: number;
	dtMs: Column<Float64Array>;
	counts: Column<Int32Array>;
	rowTempDc: Column<Int16Array>;
	/** Messages that are no readings, by place. */
	others: Map<number, UpFrame>;
	clockOffsetMs: number | null;
}

const NO_TEMP = 32_767;

export const newLog = (clockOffsetMs: number | null): MessageLog => ({
	count: 0,
	sentAtMs: column((n) => new Float64Array(n)),
	firstAtMs: column((n) => new Float64Array(n)),
	boot: column((n) => new Uint32Array(n)),
	seq: column((n) => new Uint32Array(n)),
	polarity: column((n) => new Int8Array(n)),
	tempDc: column((n) => new Int16Array(n)),
	batteryMv: column((n) => new Uint16Array(n)),
	rowFrom: column((n) => new Uint32Array(n)),
	rowCount: column((n) => new Uint8Array(n)),
	rows: 0,
	dtMs: column((n) => new Float64Array(n)),
	counts: column((n) => new Int32Array(n)),
	rowTempDc: column((n) => new Int16Array(n)),
	others: new Map(),
	clockOffsetMs
});

function appendRows(log: MessageLog, frame: ReadingFrame): void {
	const from = log.rows;
	log.rows += frame.rows.length;
	const dtMs = room(log.dtMs, log.rows);
	const counts = room(log.counts, log.rows * 3);
	const temps = room(log.rowTempDc, log.rows);
	for (let i = 0; i < frame.rows.length; i++) {
		const row = frame.rows[i]!;
		const at = from + i;
		dtMs[at] = row.dtMs;
		counts[at * 3] = row.counts[0];
		counts[at * 3 + 1] = row.counts[1];
		counts[at * 3 + 2] = row.counts[2];
		temps[at] = row.tempDc ?? NO_TEMP;
	}
}

export function append(log: MessageLog, sent: Sent): void {
	const { frame } = sent;
	const i = log.count++;
	room(log.sentAtMs, log.count)[i] = sent.sentAtMs;
	room(log.firstAtMs, log.count)[i] = sent.firstAtMs;
	room(log.boot, log.count)[i] = frame.boot;
	room(log.seq, log.count)[i] = frame.seq;
	room(log.rowFrom, log.count)[i] = log.rows;
	const rowCount = room(log.rowCount, log.count);
	const polarity = room(log.polarity, log.count);
	polarity[i] = sent.polarity;
	const tempDc = room(log.tempDc, log.count);
	const batteryMv = room(log.batteryMv, log.count);
	if (frame.kind === 'reading') {
		rowCount[i] = frame.rows.length;
		tempDc[i] = frame.tempDc ?? NO_TEMP;
		batteryMv[i] = frame.batteryMv ?? 0;
		appendRows(log, frame);
	} else {
		rowCount[i] = 0;
		log.others.set(i, frame);
	}
}

/** Temperature of a row, °C: its own or its message's. */
export function rowTempC(log: MessageLog, message: number, row: number): number | null {
	const own = log.rowTempDc.values[row]!;
	const dc = own === NO_TEMP ? log.tempDc.values[message]! : own;
	return dc === NO_TEMP ? null : dc / 10;
}

/** The frame as it was sent (without signal strength, pulse age and radio counters of readings, which no test needs). */
export function frameOf(log: MessageLog, message: number): UpFrame {
	const other = log.others.get(message);
	if (other !== undefined) return other;
	const from = log.rowFrom.values[message]!;
	const offset = log.clockOffsetMs;
	const rows = Array.from({ length: log.rowCount.values[message]! }, (_, k) => {
		const at = from + k;
		const own = log.rowTempDc.values[at]!;
		return {
			dtMs: log.dtMs.values[at]!,
			counts: [
				...log.counts.values.subarray(at * 3, at * 3 + 3)
			] as unknown as ReadingFrame['rows'][0]['counts'],
			tempDc: own === NO_TEMP ? null : own
		};
	});
	return {
		kind: 'reading',
		boot: log.boot.values[message]!,
		seq: log.seq.values[message]!,
		t: offset === null ? 0 : Math.round(log.firstAtMs.values[message]! + offset),
		sentMs: offset === null ? null : Math.round(log.sentAtMs.values[message]! + offset),
		unsigned: false,
		rows,
		polarity: log.polarity.values[message] === -1 ? -1 : 1,
		tempDc: log.tempDc.values[message]!,
		batteryMv: log.batteryMv.values[message]!,
		rssiDbm: null,
		pulse: null,
		tx: null
	};
}
