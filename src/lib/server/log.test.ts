import { expect, test } from 'vitest';
import { createLog } from './log';

function logged(record: object): string {
	let text = '';
	const log = createLog({ part: 'test' }, { write: (line) => (text += line) });
	log.info(record, 'said');
	return text;
}

test('secrets are cut out by name, at the top and one level down', () => {
	const text = logged({
		password: 'hunter2',
		config: { secret: 'hunter2', databaseUrl: 'mysql://u:hunter2@h/d' },
		headers: { authorization: 'Bearer hunter2', cookie: 'hunter2', 'set-cookie': 'hunter2' },
		node: { serial: 'NODE-1', key: 'hunter2', mqttPassword: 'hunter2' }
	});
	expect(text).not.toContain('hunter2');
	expect(text).toContain('NODE-1');
});

test('a record is one line of JSON with its part, level and time in UTC', () => {
	const text = logged({ n: 0 });
	expect(text.trim().split('\n')).toHaveLength(1);
	const record = JSON.parse(text) as Record<string, unknown>;
	expect(record).toMatchObject({ part: 'test', level: 'info', msg: 'said', n: 0 });
	expect(record['at']).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/);
});
