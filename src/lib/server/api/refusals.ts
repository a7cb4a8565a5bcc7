import { problem, PROBLEM_TYPE, problemResponse, type Problem } from './problem';

/** What the framework itself refuses under /api, in the form of every other refusal there. */
const DETAILS: Record<number, string> = {
	400: 'The request could not be read.',
	404: 'There is no such route: see /api/v1/openapi.json.',
	405: 'This route does not take this method: see Allow.',
	413: 'The body is too long.',
	415: 'The body is of a type that is not taken here.',
	500: 'Something broke here. The reference finds it in the log.'
};

/** A path that leads nowhere, or that is no UTF-8. */
export function noRoute(pathname: string): Response {
	const status = isReadable(pathname) ? 404 : 400;
	return problemResponse(problem(status, DETAILS[status] ?? ''));
}

function isReadable(pathname: string): boolean {
	try {
		// The result is used: a bundler drops a call whose result is not, and with it the refusal.
		return decodeURIComponent(pathname) !== '';
	} catch {
		return false;
	}
}

async function referenceOf(response: Response): Promise<string | null> {
	if (response.headers.get('content-type')?.includes('json') !== true) return null;
	const body: unknown = await response.json().catch(() => null);
	return typeof body === 'object' && body !== null && 'reference' in body
		? String(body.reference)
		: null;
}

/** Turns any refusal that is not yet RFC 9457 into one. */
export async function asProblem(response: Response): Promise<Response> {
	if (response.status < 400) return response;
	if (response.headers.get('content-type') === PROBLEM_TYPE) return response;
	const allow = response.headers.get('allow');
	const reference = response.status >= 500 ? await referenceOf(response) : null;
	const p: Problem = problem(response.status, DETAILS[response.status] ?? 'Refused.', {
		headers: allow === null ? {} : { allow },
		...(reference === null ? {} : { members: { reference } })
	});
	return problemResponse(p);
}
