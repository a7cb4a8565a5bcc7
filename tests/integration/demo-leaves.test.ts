import { afterAll, beforeAll, expect, test } from 'vitest';
import { DEMO_KEY } from '$lib/server/store/queries/demo';
import { Bench, LINK_SECRET } from '../support/broker';
import { openRoom, type Room } from '../support/api-room';

const bench = new Bench();
let room: Room;
beforeAll(async () => {
	const broker = await bench.broker();
	room = await openRoom({
		MQTT_URL: '',
		MQTT_PORT: String(broker.port),
		LODEKEEP_LINK_SECRET: LINK_SECRET
	});
	await room.store.pool.query("UPDATE site SET demo = TRUE WHERE slug = 'tallow-yard'");
	await room.store.pool.query(
		"UPDATE person SET demo = TRUE WHERE email IN ('operator@lodekeep.example', 'integrator@lodekeep.example')"
	);
});
afterAll(async () => {
	await room.close();
	await bench.end();
});

const leave = async (who: 'admin' | 'maintenance') => {
	const person = await room.app.signIn(room.seeded.emails[who]);
	return await person('/sites?/leaveDemo', {
		method: 'POST',
		headers: {
			origin: room.app.origin,
			accept: 'application/json',
			'content-type': 'application/x-www-form-urlencoded'
		},
		body: ''
	});
};
const rows = async <T>(text: string): Promise<T[]> => (await room.store.pool.query(text))[0] as T[];

test('only an admin takes the demo away', async () => {
	const refused = await leave('maintenance');
	expect(refused.status).toBe(403);
	expect(await rows('SELECT id FROM site WHERE removed_at_ms IS NOT NULL')).toEqual([]);
});

test('the demo leaves in one step: site, nodes, people, keys; the other sites stay', async () => {
	const key = await room.asking({ name: DEMO_KEY });
	expect((await key('/api/v1/sites/tallow-yard')).status).toBe(200);
	await leave('admin');
	const admin = await room.app.signIn(room.seeded.emails.admin);
	expect((await admin('/api/v1/sites/tallow-yard')).status).toBe(404);
	expect((await admin('/api/v1/sites/far-shed')).status).toBe(200);
	const on = await rows<{ email: string }>(
		'SELECT email FROM person WHERE switched_off_at_ms IS NULL ORDER BY email'
	);
	expect(on.map(({ email }) => email.split('@')[0])).toEqual(['admin', 'elsewhere', 'maintenance']);
	await expect.poll(async () => (await key('/api/v1/self')).status, { timeout: 3_000 }).toBe(401);
	// The pipeline takes the withdrawals: whoever signs in as one of these nodes is refused from now on.
	await expect
		.poll(
			async () =>
				await rows(
					'SELECT n.id FROM node n JOIN site s ON s.id = n.site_id WHERE s.demo AND n.withdrawn_at_ms IS NULL'
				),
			{ timeout: 10_000 }
		)
		.toEqual([]);
});
