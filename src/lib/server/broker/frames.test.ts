import fc from 'fast-check';
import mqttPacket, { type Packet } from 'mqtt-packet';
import { expect, test } from 'vitest';
import { isLevel4, PacketCursor, pubacks, PublishParts } from './frames';

// Expected bytes come from mqtt-packet, an encoder apart from this project.
const publish = (topic: string, payload: Buffer, qos: 0 | 1 | 2, messageId: number): Buffer =>
	mqttPacket.generate({
		cmd: 'publish',
		topic,
		payload,
		qos,
		messageId,
		dup: false,
		retain: false
	});

test('a PUBLISH comes apart into what was put together', () => {
	fc.assert(
		fc.property(
			fc.string({ minLength: 1, maxLength: 200, unit: 'grapheme' }),
			fc.uint8Array({ maxLength: 5_000 }),
			fc.constantFrom(0 as const, 1 as const, 2 as const),
			fc.integer({ min: 1, max: 65_535 }),
			(topic, payload, qos, messageId) => {
				const bytes = publish(topic, Buffer.from(payload), qos, messageId);
				const packet = new PacketCursor();
				const parts = new PublishParts();
				expect(packet.find(bytes, 0, 1e6)).toBe('whole');
				expect(packet.endAt).toBe(bytes.length);
				expect(parts.read(bytes, packet.flags, packet.bodyAt, packet.endAt)).toBe(true);
				expect(bytes.toString('utf8', parts.topicAt, parts.topicEnd)).toBe(topic);
				expect(bytes.subarray(parts.payloadAt).equals(payload)).toBe(true);
				expect(parts).toMatchObject({ qos, messageId: qos === 0 ? 0 : messageId });
			}
		)
	);
});

test('every proper beginning of a packet is partial, never whole and never read past its end', () => {
	const bytes = publish('lodekeep/1/NODE-0001/up/reading', Buffer.alloc(300, 1), 1, 7);
	const packet = new PacketCursor();
	for (let length = 0; length < bytes.length; length++) {
		expect(packet.find(bytes.subarray(0, length), 0, 1e6)).toBe('partial');
	}
});

test('a remaining length above the bound is refused before its bytes are read', () => {
	// OASIS MQTT 3.1.1, table 2.4: 268,435,455 is FF FF FF 7F.
	const packet = new PacketCursor();
	expect(packet.find(Buffer.from([0x30, 0xff, 0xff, 0xff, 0x7f]), 0, 65_536)).toBe('too_large');
	expect(packet.find(Buffer.from([0x30, 0xff, 0xff, 0xff, 0xff, 0x01]), 0, 65_536)).toBe(
		'malformed'
	);
});

test('lengths inside a PUBLISH that contradict each other are refused', () => {
	const parts = new PublishParts();
	const cases = [
		[0x00], // no room for a topic length
		[0x00, 0x05, 0x61], // topic longer than the packet
		[0x00, 0x01, 0x61, 0x00], // QoS 1 with half a message id
		[0x00, 0x01, 0x61, 0x00, 0x00], // message id 0 ([MQTT-2.3.1-1])
		[0x00, 0x00, 0x00, 0x01] // empty topic ([MQTT-4.7.3-1])
	];
	for (const body of cases) {
		expect(parts.read(Buffer.from(body), 0b0010, 0, body.length)).toBe(false);
	}
	// QoS 3 ([MQTT-3.3.1-4])
	expect(parts.read(Buffer.from([0x00, 0x01, 0x61, 0x00, 0x01]), 0b0110, 0, 5)).toBe(false);
});

test('PUBACKs read back as the message ids they were made of', () => {
	const seen: number[] = [];
	const parser = mqttPacket.parser();
	parser.on('packet', (packet: Packet) => {
		expect(packet.cmd).toBe('puback');
		seen.push(packet.messageId!);
	});
	parser.parse(pubacks([1, 255, 256, 65_535]));
	expect(seen).toEqual([1, 255, 256, 65_535]);
});

test('only MQTT at level 4 passes', () => {
	const connect = (protocolId: 'MQTT' | 'MQIsdp', protocolVersion: 3 | 4 | 5) => {
		const bytes = mqttPacket.generate({
			cmd: 'connect',
			protocolId,
			protocolVersion,
			clientId: 'NODE-0001',
			clean: true,
			keepalive: 60
		});
		const packet = new PacketCursor();
		packet.find(bytes, 0, 1e6);
		return isLevel4(bytes, packet.bodyAt, packet.endAt);
	};
	expect(connect('MQTT', 4)).toBe(true);
	expect(connect('MQTT', 5)).toBe(false);
	expect(connect('MQIsdp', 3)).toBe(false);
});
