import { describe, expect, test } from 'vitest';
import type { Writable } from './cbor-write';
import { openCommand, sealCommand } from './frames';
import { ID, KEY, sealed } from './test-support';
import { downTopic, upTopic } from './topics';
import type { CommandFrame } from './types';

const READING = upTopic('NODE-0001', 'reading');
const DOWN = downTopic('NODE-0001');
const COMMAND: CommandFrame = {
	id: ID,
	verb: 'pair',
	boot: 7,
	t: 1_700_000_000_000,
	expiresMs: 1_700_000_600_000,
	report: null
};

describe('commands', () => {
	test.each<CommandFrame>([
		COMMAND,
		{ ...COMMAND, verb: 'set' },
		{ ...COMMAND, verb: 'reset' },
		{ ...COMMAND, verb: 'report', report: { periodS: 2, deltaMg: 8 } }
	])('$verb is sealed and opened', (command) => {
		const opened = openCommand(DOWN, sealCommand(DOWN, command, KEY), KEY);
		expect(opened).toEqual({ ok: true, frame: command });
	});

	test('a command for another node does not open', () => {
		const bytes = sealCommand(DOWN, COMMAND, KEY);
		expect(openCommand(downTopic('NODE-0002'), bytes, KEY)).toMatchObject({ reason: 'bad_tag' });
	});

	test('an up topic takes no command', () => {
		expect(openCommand(READING, sealCommand(DOWN, COMMAND, KEY), KEY)).toMatchObject({
			reason: 'bad_topic'
		});
	});

	const base: [number, Writable][] = [
		[1, 7],
		[3, 5],
		[11, ID],
		[19, 9]
	];
	test.each<[string, [number, Writable][]]>([
		['a verb that is not known', [...base, [17, 'dance']]],
		['a report without args', [...base, [17, 'report']]],
		['no id', [base[0]!, base[1]!, base[3]!, [17, 'set']]],
		['no expiry', [base[0]!, base[1]!, base[2]!, [17, 'set']]]
	])('%s is refused', (_title, fields) => {
		expect(openCommand(DOWN, sealed(DOWN, fields), KEY)).toMatchObject({ reason: 'wrong_type' });
	});
});
