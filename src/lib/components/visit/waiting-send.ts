import { words } from '$lib/format/messages';
import type { OpenedRow, WaitingRow } from './waiting-store';

/**
 * How the sending of one recording ended. `later`: no answer, or not now; `held`: it waits for the person
 * who recorded it; `refused`: it will not be taken as it is, the server says why and what to do.
 */
export type Sent =
	| { how: 'taken' | 'added' }
	| { how: 'later' }
	| { how: 'held'; why: string }
	| { how: 'refused'; why: string };

const ANSWER_WITHIN_MS = 60_000;

/** Sends one recording under its own id: however often, the server keeps it once. */
export async function sendOne(
	row: Pick<WaitingRow, 'id' | 'personId' | 'madeAtMs'>,
	{ body, photo }: OpenedRow,
	fetcher: typeof fetch = fetch
): Promise<Sent> {
	const base = `/api/desk/sites/${encodeURIComponent(body.site)}/visits/${body.visit}`;
	const query = `?stop=${body.stop}&by=${row.personId}&at=${row.madeAtMs}`;
	const wanted =
		body.kind === 'photo'
			? { path: `${base}/photos/${row.id}${query}`, type: 'image/jpeg', body: photo ?? new Blob() }
			: {
					path: `${base}/recordings/${row.id}`,
					type: 'application/json',
					body: JSON.stringify(recordingOf(row, body))
				};
	let response: Response;
	try {
		response = await fetcher(wanted.path, {
			...{ method: 'PUT', body: wanted.body, signal: AbortSignal.timeout(ANSWER_WITHIN_MS) },
			headers: { 'content-type': wanted.type, accept: 'application/json' }
		});
	} catch {
		return { how: 'later' };
	}
	return await judge(response);
}

async function judge(response: Response): Promise<Sent> {
	const said = (await response.json().catch(() => ({}))) as { verdict?: string; detail?: string };
	if (response.ok) return { how: said.verdict === 'added' ? 'added' : 'taken' };
	const why = said.detail ?? words().ui.answered(response.status);
	if (response.status === 401 || response.status === 403) return { how: 'held', why };
	const notNow = response.status >= 500 || [408, 425, 429].includes(response.status);
	return notNow ? { how: 'later' } : { how: 'refused', why };
}

function recordingOf(
	row: Pick<WaitingRow, 'personId' | 'madeAtMs'>,
	body: OpenedRow['body']
): Record<string, unknown> {
	const common = { stop: body.stop, by: row.personId, madeAtMs: row.madeAtMs, kind: body.kind };
	switch (body.kind) {
		case 'tick':
			return { ...common, code: body.code, done: body.amount === 1 };
		case 'part':
			return { ...common, code: body.code, count: body.amount };
		case 'note':
			return { ...common, text: body.text };
		case 'outcome':
			return { ...common, code: body.code, text: body.text };
		case 'photo':
			return common;
	}
}
