import { z } from 'zod';
import { parameterIn, parameterQuery } from './desk-parameters';
import { driftBoardQuery, nodeDriftQuery } from './desk-drift';
import { code } from './v1/common';
import { spec } from './v1/spec';

const everyone = ['operator', 'maintenance', 'integrator', 'admin'] as const;
const everyday = ['operator', 'maintenance', 'admin'] as const;
const fitters = ['maintenance', 'admin'] as const;
const reason = z.string().trim().min(1).max(400);

/** Rules of the routes that only the application's own pages ask; no key reaches them (scope null). */
export const DESK_ROUTES = {
	find: spec({
		summary: 'Bays and nodes by part of a code or serial',
		scope: null,
		roles: everyone,
		query: z.strictObject({ q: z.string().trim().min(1).max(32) })
	}),
	register: spec({ summary: 'Every site in a row', scope: null, roles: everyone }),
	look: spec({
		summary: 'A person looked at the plan',
		scope: null,
		roles: everyone,
		body: z.strictObject({ changes: z.int().min(0) }),
		status: 204
	}),
	requests: spec({ summary: 'Open requests to send someone', scope: null, roles: everyone }),
	request: spec({
		summary: 'Ask for somebody at a bay',
		scope: null,
		roles: everyday,
		body: z.strictObject({ bay: code, reason }),
		status: 201
	}),
	take: spec({
		summary: 'Take a request or hand it back',
		scope: null,
		roles: fitters,
		body: z.strictObject({ hold: z.boolean() }),
		status: 204
	}),
	end: spec({
		summary: 'End a request with what was done',
		scope: null,
		roles: fitters,
		body: z.strictObject({ outcome: reason }),
		status: 204
	}),
	driftBoard: spec({
		summary: 'Drift of every node by cause, and the geomagnetic line of the site',
		scope: null,
		roles: everyone,
		query: driftBoardQuery
	}),
	nodeDrift: spec({
		summary: 'Drift of one node: hours, parts, chart, scatter, pairs',
		scope: null,
		roles: everyone,
		query: nodeDriftQuery
	}),
	ask: spec({
		summary: 'Ask the node for a reading and a report now',
		scope: null,
		roles: everyday,
		body: z.strictObject({}),
		status: 201
	}),
	undo: spec({
		summary: 'Undo a settling',
		scope: null,
		roles: everyday,
		body: z.strictObject({ act: z.int().positive() })
	}),
	lift: spec({
		summary: 'End a closure now',
		scope: null,
		roles: everyday,
		body: z.strictObject({})
	}),
	parameters: spec({
		summary: 'Every setting in force at a site, or for one node of it, and who changed it',
		scope: null,
		roles: everyone,
		query: parameterQuery
	}),
	setParameter: spec({
		summary: 'Set a setting of a site or node, or take it back',
		scope: null,
		roles: ['maintenance', 'admin'],
		body: parameterIn
	}),
	undoParameter: spec({
		summary: 'Undo the last change of a setting',
		scope: null,
		roles: ['maintenance', 'admin'],
		body: z.strictObject({})
	}),
	earth: spec({
		summary: 'A node’s quiet field against the Earth’s',
		scope: null,
		roles: everyone
	}),
	timeline: spec({
		summary: 'Everything that happened to a bay and its nodes',
		scope: null,
		roles: everyone,
		query: z.strictObject({ before: z.coerce.number().int().min(0).optional() })
	})
} as const;
