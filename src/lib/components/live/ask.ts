import { words } from '$lib/format/messages';

/** What the application answers its own pages, or why it did not. */
export class AskError extends Error {
	constructor(
		/** 0 = no answer at all. */
		readonly status: number,
		/** A sentence for people. */
		message: string,
		/** Field pointers of a refused body. */
		readonly errors: readonly { pointer: string; detail: string }[] = []
	) {
		super(message);
	}
}

export interface Answer<T> {
	body: T;
	/** Site-As-Of: when a node of the site was last heard. */
	asOfMs: number | null;
}

const ANSWER_WITHIN_MS = 10_000;

/** Plain fetch: the browser itself revalidates, so an unchanged site costs a 304 (house.md, traps). */
export async function ask<T>(
	path: string,
	init: RequestInit = {},
	fetcher = fetch
): Promise<Answer<T>> {
	let response: Response;
	try {
		response = await fetcher(path, {
			...init,
			headers: { accept: 'application/json', ...init.headers },
			signal: init.signal ?? AbortSignal.timeout(ANSWER_WITHIN_MS)
		});
	} catch {
		throw new AskError(0, words().signIn.noAnswer);
	}
	if (!response.ok) throw await refusal(response);
	const asOf = response.headers.get('site-as-of');
	const body = (response.status === 204 ? null : await response.json()) as T;
	return { body, asOfMs: asOf === null ? null : Date.parse(asOf) };
}

/** Sends a JSON body; a lost answer can be asked for again under the same key without doing it twice. */
export async function send<T>(
	method: 'POST' | 'PATCH' | 'DELETE',
	path: string,
	body?: unknown
): Promise<T> {
	const answer = await ask<T>(path, {
		method,
		headers: {
			'idempotency-key': crypto.randomUUID(),
			...(body === undefined ? {} : { 'content-type': 'application/json' })
		},
		...(body === undefined ? {} : { body: JSON.stringify(body) })
	});
	return answer.body;
}

async function refusal(response: Response): Promise<AskError> {
	const problem = (await response.json().catch(() => ({}))) as {
		title?: string;
		detail?: string;
		errors?: { pointer: string; detail: string }[];
	};
	const text = problem.detail ?? problem.title ?? words().ui.answered(response.status);
	return new AskError(response.status, text, problem.errors ?? []);
}
