import { afterAll, beforeAll, expect, test } from 'vitest';
import type { EarthCheck, ParameterSheet } from '$lib/schemas/desk-parameters';
import { openRoom, type Room } from '../support/api-room';
import type { TestApp } from '../support/app';

const PATH = '/api/desk/sites/tallow-yard/parameters';
let room: Room;
let fitter: TestApp['ask'];
let reader: TestApp['ask'];

beforeAll(async () => {
	room = await openRoom();
	fitter = await room.app.signIn(room.seeded.emails.maintenance);
	reader = await room.app.signIn(room.seeded.emails.operator);
});
afterAll(async () => await room.close());

const sheet = async (query = '') =>
	(await reader(PATH + query)).json() as unknown as ParameterSheet;
const item = async (name: string, query = '') =>
	(await sheet(query)).items.find((one) => one.name === name)!;
const set = async (body: object) => await fitter(PATH, { method: 'POST', body });

test('without an override the default stands, with its range, unit and reason', async () => {
	expect(await item('onMg')).toMatchObject({
		...{ part: 'detection', unit: 'mG', min: 10, max: 200, defaultValue: 35 },
		...{ value: 35, source: 'default', site: null, node: null }
	});
	expect(await item('driftingMg')).toMatchObject({ part: 'drift', value: 10 });
});

test('a value out of range is refused, naming field and range; so is a setting that is none', async () => {
	const over = await set({ name: 'onMg', value: 900, why: 'louder' });
	expect(over.status).toBe(422);
	expect(over.json()).toMatchObject({
		detail: 'onMg must lie within 10 mG to 200 mG; 900 does not.',
		errors: [{ pointer: '#/value', detail: 'must lie within 10 mG to 200 mG' }]
	});
	expect((await set({ name: 'offMg', value: 20, why: 'x' })).json()).toMatchObject({
		errors: [{ pointer: '#/name' }]
	});
	const mute = await set({ name: 'onMg', value: 40, why: '  ' });
	expect(mute.json()).toMatchObject({ errors: [{ pointer: '#/why' }] });
	expect((await sheet()).changes).toEqual([]);
});

test('site, then node: each says who and why; undo and taking back return to what stood before', async () => {
	expect((await set({ name: 'onMg', value: 40, why: 'lorries' })).status).toBeLessThan(300);
	expect((await set({ name: 'onMg', value: 40, why: 'again' })).status).toBe(409);
	const own = { name: 'onMg', value: 55, node: 'SEED-A-02', why: 'tram line' };
	expect((await set(own)).status).toBeLessThan(300);
	expect(await item('onMg')).toMatchObject({
		...{ value: 40, source: 'site', site: { value: 40, why: 'lorries', by: 'a colleague' } }
	});
	expect(await item('onMg', '?node=SEED-A-02')).toMatchObject({ value: 55, source: 'node' });
	expect(await item('onMg', '?node=SEED-A-01')).toMatchObject({ value: 40, source: 'site' });

	await set({ ...own, value: 60, why: 'more' });
	const undo = async (id: number) =>
		await fitter(`${PATH}/${id}/undo`, { method: 'POST', body: {} });
	const node = async () => await item('onMg', '?node=SEED-A-02');
	const first = (await sheet('?node=SEED-A-02')).changes.find(({ value }) => value === 55)!;
	expect(first).toMatchObject({ undo: false, endedWhy: 'more' });
	expect((await undo(first.id)).status).toBe(409);
	expect((await undo((await node()).node!.id)).status).toBeLessThan(300);
	expect(await node()).toMatchObject({ value: 55, node: { why: 'undone: more' } });

	expect((await set({ ...own, value: null, why: 'tram gone' })).status).toBeLessThan(300);
	expect(await node()).toMatchObject({ value: 40, source: 'site', node: null });
	expect((await set({ ...own, value: null, why: 'twice' })).status).toBe(409);
	const acts = await room.store.pool.query(
		"SELECT COUNT(*) AS n FROM act WHERE kind = 'parameters'"
	);
	expect(acts[0]).toEqual([{ n: 5 }]);
});

test('a reader changes nothing', async () => {
	const body = { name: 'onMg', value: 50, why: 'no' };
	expect((await reader(PATH, { method: 'POST', body })).status).toBe(403);
});

test('the Earth check is of the reference: none learned, none made up', async () => {
	const none = (await reader('/api/desk/nodes/SEED-A-02/earth')).json() as unknown as EarthCheck;
	expect(none).toMatchObject({ verdict: 'not_learned', ratio: null, withinModelYears: true });
	const learn = async (scale: number, offset: string) =>
		await room.store.pool.query(
			`INSERT INTO reference (node_id, bay_id, learned_at_ms, x_mg, y_mg, z_mg, sigma_mg, readings, offset_x_mg, offset_y_mg, offset_z_mg)
			 VALUES (?, ?, ?, ?, 0, ?, 1, 30, ${offset}, ${offset}, ${offset})`,
			[
				room.seeded.nodes['SEED-A-02'],
				room.seeded.bays['A-02'],
				Date.now(),
				0,
				none.earthMg * scale
			]
		);
	const verdict = async () =>
		((await reader('/api/desk/nodes/SEED-A-02/earth')).json() as unknown as EarthCheck).verdict;
	await learn(1, 'NULL');
	expect(await verdict()).toBe('no_offset');
	for (const [scale, wanted] of [
		[1.2, 'agrees'],
		[1.4, 'off'],
		[4.1, 'wrong_resolution'],
		[0.25, 'wrong_resolution']
	] as const) {
		await room.store.pool.query('DELETE FROM reference');
		await learn(scale, '1');
		expect(await verdict(), String(scale)).toBe(wanted);
	}
});
