import { STATUS_CODES } from 'node:http';
import type { z } from 'zod';
import type { ProblemBody } from '$lib/schemas/v1/common';

export const PROBLEM_TYPE = 'application/problem+json';

/** A refusal as RFC 9457 says it; handlers return it, they do not throw it. */
export interface Problem {
	readonly kind: 'problem';
	readonly body: ProblemBody;
	readonly headers: Readonly<Record<string, string>>;
}

export interface ProblemExtra {
	type?: string;
	errors?: { pointer: string; detail: string }[];
	headers?: Record<string, string>;
	/** Further members (RFC 9457, 3.2). */
	members?: Record<string, unknown>;
}

/** With about:blank the title is the HTTP phrase (RFC 9457, 4.2.1). */
export function problem(status: number, detail: string, extra: ProblemExtra = {}): Problem {
	return {
		kind: 'problem',
		body: {
			type: extra.type ?? 'about:blank',
			title: STATUS_CODES[status] ?? 'Error',
			status,
			detail,
			...(extra.errors === undefined ? {} : { errors: extra.errors }),
			...extra.members
		},
		headers: extra.headers ?? {}
	};
}

export const isProblem = (value: unknown): value is Problem =>
	typeof value === 'object' && value !== null && 'kind' in value && value.kind === 'problem';

export function problemResponse(p: Problem): Response {
	return new Response(JSON.stringify(p.body), {
		status: p.body.status,
		headers: { 'content-type': PROBLEM_TYPE, 'cache-control': 'no-store', ...p.headers }
	});
}

/** RFC 6901 pointer into the body, as a URI fragment. */
const pointer = (path: readonly PropertyKey[]): string =>
	'#' + path.map((p) => `/${String(p).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('');

type Issue = z.core.$ZodIssue;

/** Of the branches of a union the one that got furthest is what the sender meant. */
function flatten(
	issue: Issue,
	base: readonly PropertyKey[] = []
): { path: PropertyKey[]; message: string }[] {
	const path = [...base, ...issue.path];
	if (issue.code === 'invalid_union' && issue.errors.length > 0) {
		const depth = (branch: Issue[]) => Math.max(0, ...branch.map((i) => i.path.length));
		const best = [...issue.errors].sort((a, b) => depth(b) - depth(a))[0] ?? [];
		return best.flatMap((i) => flatten(i, path));
	}
	if (issue.code === 'unrecognized_keys') {
		return issue.keys.map((key) => ({ path: [...path, key], message: 'is not known here' }));
	}
	return [{ path, message: issue.message }];
}

const MAX_ERRORS = 20;

export function invalidBody(error: z.ZodError): Problem {
	const errors = error.issues
		.flatMap((i) => flatten(i))
		.slice(0, MAX_ERRORS)
		.map(({ path, message }) => ({ pointer: pointer(path), detail: message }));
	return problem(400, 'The body is not as described: see errors and /api/v1/openapi.json.', {
		errors
	});
}

export function invalidQuery(error: z.ZodError): Problem {
	const said = error.issues
		.flatMap((i) => flatten(i))
		.slice(0, MAX_ERRORS)
		.map(({ path, message }) => `${path.map(String).join('.')}: ${message}`);
	return problem(400, `Query: ${said.join('; ')}.`);
}
