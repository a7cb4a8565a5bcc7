import { expect, test } from 'vitest';
import { sendOne } from './waiting-send';
import type { WaitingBody } from './waiting-store';

const ROW = { id: '0b4f7c1e-0000-4000-8000-000000000001', personId: 7, madeAtMs: 1_000 };
const BODY: WaitingBody = {
	...{ site: 'tallow-yard', visit: 3, stop: 9, bay: 'A-05', kind: 'tick' },
	...{ code: 'node_found', amount: 1, text: '' }
};
const answering = (status: number, body: unknown) => {
	const asked: { path: string; init: RequestInit | undefined }[] = [];
	const fetcher: typeof fetch = async (path, init) => {
		asked.push({ path: path as string, init });
		return Response.json(body, { status });
	};
	return { asked, fetcher };
};
const outcome = async (status: number, body: unknown = {}) =>
	await sendOne(ROW, { body: BODY, photo: null }, answering(status, body).fetcher);

/* Issue 6: 'syncs later without loss or doubling'; RFC 9110 for what the codes mean. */
test('it is put under its own id and says who recorded it', async () => {
	const { asked, fetcher } = answering(200, { verdict: 'taken' });
	expect(await sendOne(ROW, { body: BODY, photo: null }, fetcher)).toEqual({ how: 'taken' });
	expect(asked[0]?.path).toBe(`/api/desk/sites/tallow-yard/visits/3/recordings/${ROW.id}`);
	expect(JSON.parse(asked[0]?.init?.body as string)).toEqual({
		...{ stop: 9, by: 7, madeAtMs: 1_000, kind: 'tick', code: 'node_found', done: true }
	});
});

test('a photo goes as its bytes', async () => {
	const { asked, fetcher } = answering(200, { verdict: 'added' });
	const photo = { body: { ...BODY, kind: 'photo' as const }, photo: new Blob(['x']) };
	expect(await sendOne(ROW, photo, fetcher)).toEqual({ how: 'added' });
	expect(asked[0]?.path).toContain(`/photos/${ROW.id}?stop=9&by=7&at=1000`);
});

test('no answer and a busy server are no refusal: it is tried again', async () => {
	const dead: typeof fetch = async () => await Promise.reject(new TypeError('no network'));
	expect(await sendOne(ROW, { body: BODY, photo: null }, dead)).toEqual({ how: 'later' });
	for (const status of [429, 500, 502, 503])
		expect(await outcome(status)).toEqual({ how: 'later' });
});

test("an expired session and another person's keep it until its own person is back", async () => {
	expect(await outcome(401, { detail: 'sign in' })).toEqual({ how: 'held', why: 'sign in' });
	expect(await outcome(403)).toMatchObject({ how: 'held' });
});

test('a refusal is kept with what the server said', async () => {
	expect(await outcome(422, { detail: 'code: no' })).toEqual({ how: 'refused', why: 'code: no' });
	expect(await outcome(413)).toMatchObject({ how: 'refused' });
});
