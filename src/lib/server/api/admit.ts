import type { RequestEvent } from '@sveltejs/kit';
import type { Role, Scope } from '$lib/schemas/roles';
import { SCOPES_OF_ROLE } from '$lib/schemas/roles';
import type { RouteSpec } from '$lib/schemas/v1/spec';
import { clientAddress } from '$lib/server/auth/authjs';
import type { Reach } from '$lib/server/auth/reach';
import { corsFields } from './cors';
import type { Instance } from './instance';
import { problem, type Problem } from './problem';
import { POLICIES, rateFields, type Verdict } from './rate-limit';

type Fields = Record<string, string>;
export type Admission =
	{ ok: true; reach: Reach; fields: Fields } | { ok: false; problem: Problem; fields: Fields };

/** For routes that ask nobody: sees nothing, may do nothing. */
const ANYBODY: Reach = {
	actor: 'person:0',
	role: null,
	scopes: new Set(),
	sites: new Set(),
	personalAllowed: false,
	name: '',
	mustChangePassword: false
};

/** The roles of people that a rule lets in. */
export function rolesOf(rule: Pick<RouteSpec, 'scope' | 'roles'>): readonly Role[] {
	if (rule.roles !== undefined) return rule.roles;
	const roles = Object.keys(SCOPES_OF_ROLE) as Role[];
	const { scope } = rule;
	if (scope === 'any' || scope === 'none') return roles;
	return scope === null ? [] : roles.filter((role) => SCOPES_OF_ROLE[role].includes(scope));
}

/** What is missing for this rule, in words; null = nothing. */
export function missing(rule: RouteSpec, reach: Reach): string | null {
	const isKey = reach.role === null;
	if (isKey && rule.scope === null) return 'This is for signed-in people, not for keys.';
	if (isKey && rule.scope !== 'any' && !reach.scopes.has(rule.scope as Scope)) {
		return `This key lacks the scope '${rule.scope}'.`;
	}
	if (!isKey && reach.role !== null && !rolesOf(rule).includes(reach.role)) {
		return `This is not for the role '${reach.role}'.`;
	}
	if (rule.allSites === true && reach.sites !== 'all') {
		return 'This needs all sites, not a list of them.';
	}
	return null;
}

/** The one place where a route's rule meets who asks. */
export async function admit(
	app: Instance,
	event: RequestEvent,
	rule: RouteSpec,
	nowMs: number
): Promise<Admission> {
	if (rule.scope === 'none') return { ok: true, reach: ANYBODY, fields: {} };
	const { reach, key } = event.locals;
	if (reach === null) return stranger(app, event, nowMs);
	const verdict = app.limiter.take(
		reach.actor,
		reach.role === null ? POLICIES.key : POLICIES.person,
		nowMs
	);
	const fields: Fields = rateFields(verdict);
	if (!verdict.allowed) return { ok: false, fields, problem: tooMany(verdict) };
	const origin = event.request.headers.get('origin');
	if (key !== null && origin !== null && origin !== event.url.origin) {
		if (!key.origins.has(origin)) {
			return refuse(fields, problem(403, `This key may not be used from pages of ${origin}.`));
		}
		Object.assign(fields, corsFields(origin));
	}
	if (reach.mustChangePassword) {
		return refuse(fields, problem(403, 'Change your password first.'));
	}
	const lacks = missing(rule, reach);
	if (lacks !== null) return refuse(fields, problem(403, lacks));
	return { ok: true, reach, fields };
}

const refuse = (fields: Fields, p: Problem): Admission => ({ ok: false, fields, problem: p });

/** No good key, no good session. Guessing keys is limited by address. */
function stranger(app: Instance, event: RequestEvent, nowMs: number): Admission {
	const verdict = app.limiter.take(clientAddress(event), POLICIES.stranger, nowMs);
	const fields = rateFields(verdict);
	if (!verdict.allowed) return refuse(fields, tooMany(verdict));
	const sent = event.request.headers.has('authorization');
	const detail = sent
		? 'This key is not known, revoked or over.'
		: 'Send a key as Authorization: Bearer, or sign in.';
	const challenge = sent
		? 'Bearer realm="lodekeep", error="invalid_token"'
		: 'Bearer realm="lodekeep"';
	return refuse(fields, problem(401, detail, { headers: { 'www-authenticate': challenge } }));
}

/** check-values 9j: the problem type of the RateLimit draft. */
export function tooMany(v: Verdict): Problem {
	return problem(429, `At most ${v.policy.requests} requests in ${v.policy.windowS} s.`, {
		type: 'https://iana.org/assignments/http-problem-types#quota-exceeded',
		headers: { 'retry-after': String(v.resetS) },
		members: { 'violated-policies': [v.policy.name] }
	});
}
