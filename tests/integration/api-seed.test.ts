import { afterAll, beforeAll, expect, test } from 'vitest';
import { connect, type Store } from '$lib/server/store/connect';
import { startDatabase, type TestDatabase } from '../support/database';
import { seed } from '../support/seed';
import { seedStory } from '../support/seed-rows';

let database: TestDatabase;
let store: Store;

beforeAll(async () => {
	database = await startDatabase();
	store = connect(database.url);
});
afterAll(async () => {
	await store.close();
	await database.close();
});

test('the seeded yard has 24 bays and a change log without gaps', async () => {
	const seeded = await seed(store.db);
	expect(Object.keys(seeded.bays)).toHaveLength(24);
	const [rows] = await store.pool.query('SELECT COUNT(*) n, MIN(id) a, MAX(id) b FROM `change`');
	expect(rows).toEqual([{ n: seeded.lastChange, a: 1, b: seeded.lastChange }]);
});

const T = 1_800_000_000_000;
test.each([
	['a vehicle that came is seen by detection', true, 77, 'occupied'],
	['a long one too', true, 3000, 'occupied'],
	['a bay that nobody entered is vacant', false, 18, 'vacant']
] as const)('%s', (_, taken, sinceMin, state) => {
	const { view } = seedStory(1, taken, T - sinceMin * 60_000, T);
	expect(view.state).toBe(state);
	expect(view.doubt).toBeNull();
});
