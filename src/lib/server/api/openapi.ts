import { z } from 'zod';
import { problem } from '$lib/schemas/v1/common';
import { GEOJSON_ANSWER, ROUTES, type RouteName } from '$lib/schemas/v1/route-table';
import type { RouteSpec } from '$lib/schemas/v1/spec';
import { PROBLEM_TYPE } from './problem';

type Json = Record<string, unknown>;

/** The very schema that checks a request, or that an answer is tested against. */
function jsonSchema(schema: z.ZodType, io: 'input' | 'output'): Json {
	const made = z.toJSONSchema(schema, { io, reused: 'inline', unrepresentable: 'any' });
	const { $schema: _, ...rest } = made as Json;
	return rest;
}

const ROOT = '/api/v1';

const PARAMS: Record<string, string> = {
	site: "The site's slug.",
	code: "The bay's code.",
	serial: "The node's serial.",
	id: 'The number of the film refresh.'
};

function operationId(method: string, path: string): string {
	const words = path.split(/[^A-Za-z0-9]+/).filter((word) => word !== '');
	return [method.toLowerCase(), ...words]
		.map((word, i) => (i === 0 ? word : word[0]?.toUpperCase() + word.slice(1)))
		.join('');
}

const pathParams = (path: string): Json[] =>
	[...path.matchAll(/\{(\w+)\}/g)].map(([, name = '']) => ({
		name,
		in: 'path',
		required: true,
		description: PARAMS[name] ?? name,
		schema: { type: 'string' }
	}));

function queryParams(rule: RouteSpec): Json[] {
	if (rule.query === undefined) return [];
	const { properties = {}, required = [] } = jsonSchema(rule.query, 'input') as {
		properties?: Record<string, Json>;
		required?: string[];
	};
	return Object.entries(properties).map(([name, schema]) => ({
		name,
		in: 'query',
		required: required.includes(name),
		schema
	}));
}

const idempotencyParam = {
	name: 'Idempotency-Key',
	in: 'header',
	required: false,
	description: 'The same key and body give the same answer for 24 h; another body 409.',
	schema: { type: 'string', maxLength: 128 }
};

const conditionalParam = {
	name: 'If-None-Match',
	in: 'header',
	required: false,
	description: 'The ETag of the answer before; 304 when nothing changed.',
	schema: { type: 'string' }
};

const problemRef = { $ref: '#/components/responses/Problem' };

function body(rule: RouteSpec): Json {
	if (rule.body === undefined || rule.body === null) return {};
	const schema = jsonSchema(rule.body, 'input');
	const content: Json = { 'application/json': { schema } };
	if (rule.geojson === true) content['application/geo+json'] = { schema };
	return { requestBody: { required: rule.bodyOptional !== true, content } };
}

function success(rule: RouteSpec): Json {
	if (rule.answer === undefined) {
		return { description: rule.status === 204 ? 'Done.' : 'The answer.' };
	}
	const content: Json = {
		'application/json': { schema: jsonSchema(rule.answer, 'output') }
	};
	if (rule.geojson === true && rule.stamp === 'change') {
		content['application/geo+json'] = { schema: jsonSchema(GEOJSON_ANSWER, 'output') };
	}
	return { description: 'The answer.', content };
}

function operation(name: RouteName): [string, string, Json] {
	const rule: RouteSpec = ROUTES[name];
	const [method = '', path = ''] = name.split(' ');
	const isRead = method === 'GET';
	const conditional = isRead && rule.stamp !== 'none' ? [conditionalParam] : [];
	const own = isRead ? conditional : [idempotencyParam];
	const scope =
		rule.scope === 'any' || rule.scope === 'none' || rule.scope === null
			? ''
			: `Scope \`${rule.scope}\`. `;
	return [
		method.toLowerCase(),
		ROOT + path,
		{
			operationId: operationId(method, path),
			summary: rule.summary,
			description: `${scope}Lists, errors, cursors and ETags as the handbook's conventions say.`,
			tags: [path.split('/')[1] ?? 'self'],
			security: rule.scope === 'none' ? [] : [{ key: [] }],
			parameters: [...pathParams(path), ...queryParams(rule), ...own],
			...body(rule),
			responses: {
				[String(rule.status ?? 200)]: success(rule),
				...(conditional.length > 0 ? { '304': { description: 'Nothing changed.' } } : {}),
				'4XX': problemRef,
				'5XX': problemRef
			}
		}
	];
}

const made = new Map<string, Json>();

/** OpenAPI 3.1 of API v1, as this installation is called. */
export function openapi(origin: string): Json {
	const known = made.get(origin);
	if (known !== undefined) return known;
	const paths: Record<string, Json> = {};
	for (const name of Object.keys(ROUTES) as RouteName[]) {
		const [method, path, said] = operation(name);
		paths[path] = { ...paths[path], [method]: said };
	}
	const document = {
		openapi: '3.1.0',
		info: {
			title: 'Lodekeep API',
			version: '1',
			summary: 'Which parking bays are taken, how sure that is, and the nodes behind it.',
			description:
				'Not a safety device: never the only means that keeps a barrier, bollard or gate from moving.'
		},
		servers: [{ url: origin }],
		tags: ['self', 'sites', 'nodes', 'refreshes', 'openapi.json'].map((name) => ({ name })),
		paths,
		components: {
			securitySchemes: {
				key: { type: 'http', scheme: 'bearer', description: 'lodekeep_<id>_<secret>' }
			},
			responses: {
				Problem: {
					description: 'RFC 9457 problem details.',
					content: { [PROBLEM_TYPE]: { schema: jsonSchema(problem, 'output') } }
				}
			}
		}
	};
	// One origin as a rule: without ORIGIN set a few names of one host.
	if (made.size < 8) made.set(origin, document);
	return document;
}
