import { expect, test } from 'vitest';
import { deliver, GOOD_NETWORK, type Network } from './delivery';
import { append, newLog, type MessageLog } from './message-log';
import { random } from './random';
import { noFacts } from './truth';

const HOUR_MS = 3_600_000;

function logOf(messages: number): MessageLog {
	const log = newLog(0);
	for (let i = 0; i < messages; i++) {
		append(log, {
			nodeIndex: 0,
			sentAtMs: i * 1000,
			firstAtMs: i * 1000,
			polarity: 1,
			frame: {
				kind: 'reading',
				boot: 1,
				seq: i,
				t: i * 1000,
				sentMs: i * 1000,
				unsigned: false,
				rows: [{ dtMs: 0, counts: [i, -i, 2 * i], tempDc: null }],
				polarity: 1,
				tempDc: 200,
				batteryMv: 3600,
				rssiDbm: null,
				pulse: null,
				tx: null
			}
		});
	}
	return log;
}

const carry = (network: Network, messages = 5000) => {
	const facts = noFacts();
	return { facts, got: deliver(logOf(messages), network, [], 0, random(1, 'net'), facts) };
};

test('a good network loses nothing and takes under a second', () => {
	const { got } = carry(GOOD_NETWORK);
	expect(got.message).toHaveLength(5000);
	got.arrivedAtMs.forEach((atMs, i) => expect(atMs - i * 1000).toBeLessThan(1000));
});

test('20 % of messages lost are 20 % of messages lost', () => {
	const { facts, got } = carry({ ...GOOD_NETWORK, lossShare: 0.2 });
	expect(facts.lost + got.message.length).toBe(5000);
	// Three standard errors of 5000 draws.
	expect(Math.abs(facts.lost / 5000 - 0.2)).toBeLessThan(0.017);
});

test('during an outage messages wait and come afterwards in their order', () => {
	const facts = noFacts();
	const outage = { fromMs: 1_000_000, toMs: 1_000_000 + HOUR_MS };
	const got = deliver(logOf(5000), GOOD_NETWORK, [outage], 0, random(2, 'net'), facts);
	const held = got.arrivedAtMs.slice(1000, 4600);
	expect(Math.min(...held)).toBeGreaterThanOrEqual(outage.toMs);
	held.slice(1).forEach((atMs, i) => expect(atMs).toBeGreaterThan(held[i]!));
	expect(facts.backlog).toBe(3600);
});

test('messages of commissioning are never lost', () => {
	const facts = noFacts();
	const got = deliver(
		logOf(100),
		{ ...GOOD_NETWORK, lossShare: 1 },
		[],
		50_000,
		random(3, 'net'),
		facts
	);
	expect(got.message).toEqual(Array.from({ length: 50 }, (_, i) => i));
});
