/** Frames opened a second, HMAC and all checks included, on one core. `npx tsx tests/bench/wire.ts` */
import { openUp, sealUp } from '../../src/lib/wire/frames';
import { upTopic } from '../../src/lib/wire/topics';
import type { ReadingFrame } from '../../src/lib/wire/types';

const KEY = Uint8Array.from({ length: 32 }, (_, i) => i);
const TOPIC = upTopic('NODE-0001', 'reading');
const OPTS = { unsignedAllowed: false, rangeCounts: { min: -131_072, max: 131_071 } };
const MIN_MS = 2000;

function reading(rows: number): ReadingFrame {
	return {
		kind: 'reading',
		boot: 7,
		seq: 42,
		t: 1_700_000_000_000,
		sentMs: 1_700_000_000_000,
		unsigned: false,
		rows: Array.from({ length: rows }, (_, i) => ({
			dtMs: i * 250,
			counts: [1234, -2345, 3456],
			tempDc: null
		})),
		polarity: 1,
		tempDc: 215,
		batteryMv: 3600,
		rssiDbm: -80,
		pulse: { ageS: 9000, count: 3 },
		tx: null
	};
}

function openedPerS(rows: number): number {
	const message = sealUp(TOPIC, reading(rows), KEY, 5);
	const startMs = performance.now();
	let opened = 0;
	while (performance.now() - startMs < MIN_MS) {
		for (let i = 0; i < 1000; i++) if (openUp(TOPIC, message, [KEY], OPTS).ok) opened++;
	}
	return Math.round((opened * 1000) / (performance.now() - startMs));
}

openedPerS(1);
for (const rows of [1, 10, 120]) {
	const perS = openedPerS(rows);
	console.log(JSON.stringify({ bench: 'wire', rows, framesPerS: perS, readingsPerS: perS * rows }));
}
