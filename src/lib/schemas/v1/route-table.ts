import { z } from 'zod';
import * as bays from './bays';
import { acted, changeIdIn, page } from './common';
import * as drift from './drift';
import * as feed from './feed';
import { featureCollection } from './geojson';
import * as nodes from './nodes';
import * as refresh from './refresh';
import { selfView } from './self';
import * as sites from './sites';
import { spec } from './spec';

const everyday = ['operator', 'maintenance', 'admin'] as const;
const fitters = ['maintenance', 'admin'] as const;
const none = z.strictObject({});
const paged = z.strictObject(page);

/**
 * The route table of API v1: what each route checks and what openapi.json says. A route file takes
 * its rule from here by name; tests/integration/auth-routes.test.ts fails when one does not.
 */
export const ROUTES = {
	'GET /self': spec({
		summary: 'Who this key or session is, and what it may do',
		scope: 'any',
		answer: selfView
	}),
	'GET /sites': spec({
		summary: 'Sites within reach',
		scope: 'occupancy',
		query: paged,
		answer: sites.siteList
	}),
	'POST /sites': spec({
		summary: 'Make a site',
		scope: 'provision',
		roles: fitters,
		allSites: true,
		body: sites.siteIn,
		answer: sites.siteView,
		status: 201
	}),
	'GET /sites/{site}': spec({
		summary: 'A site with counts by zone',
		scope: 'occupancy',
		answer: sites.siteWithCounts,
		stamp: 'change'
	}),
	'PATCH /sites/{site}': spec({
		summary: 'Change what is said of a site',
		scope: 'provision',
		roles: fitters,
		body: sites.sitePatch,
		answer: sites.siteView
	}),
	'DELETE /sites/{site}': spec({
		summary: 'Remove a site; its record stays with the operator',
		scope: 'provision',
		roles: ['admin'],
		status: 204
	}),
	'GET /sites/{site}/live': spec({
		summary: 'Whether the site is heard: live, late or lost',
		scope: 'occupancy',
		answer: sites.live,
		stamp: 'none'
	}),
	'GET /sites/{site}/bays': spec({
		summary: 'States of all bays, or with ?changes= of those that changed',
		scope: 'occupancy',
		query: z.strictObject({ ...page, changes: changeIdIn.optional() }),
		answer: bays.bayList,
		geojson: true,
		stamp: 'change'
	}),
	'POST /sites/{site}/bays': spec({
		summary: 'Add bays, all or nothing',
		scope: 'provision',
		roles: fitters,
		body: bays.baysIn,
		geojson: true,
		answer: bays.baysCreated,
		status: 201
	}),
	'GET /sites/{site}/bays/{code}': spec({
		summary: "A bay with evidence and its node's report",
		scope: 'occupancy',
		answer: bays.bayDetail
	}),
	'PATCH /sites/{site}/bays/{code}': spec({
		summary: "Change a bay's code, zone, outline or mark",
		scope: 'provision',
		roles: fitters,
		body: bays.bayPatch,
		answer: bays.bayDetail
	}),
	'DELETE /sites/{site}/bays/{code}': spec({
		summary: 'Remove a bay that has no node',
		scope: 'provision',
		roles: fitters,
		status: 204
	}),
	'POST /sites/{site}/bays/{code}/settle': spec({
		summary: 'Say what a bay is, and how that is known',
		scope: 'provision',
		roles: everyday,
		body: bays.settleIn,
		answer: acted
	}),
	'GET /sites/{site}/closures': spec({
		summary: 'Closures that run or are to come',
		scope: 'occupancy',
		query: paged,
		answer: feed.closureList,
		stamp: 'change'
	}),
	'POST /sites/{site}/closures': spec({
		summary: 'Close bays or a zone for a time',
		scope: 'provision',
		roles: everyday,
		body: feed.closureIn,
		answer: feed.closuresMade,
		status: 201
	}),
	'GET /sites/{site}/events': spec({
		summary: 'What was said when: ordered, append-only',
		scope: 'occupancy',
		query: feed.eventQuery,
		answer: feed.eventList,
		stamp: 'change'
	}),
	'GET /sites/{site}/changes': spec({
		summary: "The site's change log",
		scope: 'occupancy',
		query: feed.changeQuery,
		answer: feed.changeList,
		stamp: 'change'
	}),
	'GET /sites/{site}/stays': spec({
		summary: 'Stays of the effective history',
		scope: 'occupancy',
		query: feed.stayQuery,
		answer: feed.stayList,
		stamp: 'change'
	}),
	'GET /sites/{site}/nodes': spec({
		summary: 'Nodes of a site',
		scope: 'telemetry',
		query: paged,
		answer: nodes.nodeList
	}),
	'POST /sites/{site}/nodes': spec({
		summary: 'Register nodes, all or nothing; keys are shown this once',
		scope: 'provision',
		roles: fitters,
		body: nodes.nodesIn,
		answer: nodes.nodesCreated,
		status: 201
	}),
	'GET /nodes/{serial}': spec({
		summary: 'A node: condition, last reading, reference, offset',
		scope: 'telemetry',
		answer: nodes.nodeDetail
	}),
	'PATCH /nodes/{serial}': spec({
		summary: 'Change what is said of a node',
		scope: 'provision',
		roles: fitters,
		body: nodes.nodePatch,
		answer: nodes.nodeDetail
	}),
	'POST /nodes/{serial}/key': spec({
		summary: 'A new key; the old one holds for the overlap',
		scope: 'provision',
		roles: fitters,
		body: nodes.keyIn,
		bodyOptional: true,
		answer: nodes.keyMade
	}),
	'POST /nodes/{serial}/place': spec({
		summary: 'Put a node into a bay',
		scope: 'provision',
		roles: fitters,
		body: nodes.placeIn,
		answer: acted
	}),
	'POST /nodes/{serial}/accept': spec({
		summary: 'Accept the learned reference',
		scope: 'provision',
		roles: fitters,
		body: nodes.acceptIn,
		answer: acted
	}),
	'POST /nodes/{serial}/withdraw': spec({
		summary: 'End of service of a node',
		scope: 'provision',
		roles: fitters,
		body: nodes.withdrawIn,
		bodyOptional: true,
		answer: acted
	}),
	'GET /nodes/{serial}/readings': spec({
		summary: 'Readings: min, max and mean per bucket, or ?raw=true',
		scope: 'telemetry',
		query: nodes.readingQuery,
		answer: nodes.readingList
	}),
	'GET /nodes/{serial}/drift': spec({
		summary: 'What moved the quiet field since the reference, by cause',
		scope: 'telemetry',
		query: drift.nodeDriftQuery,
		answer: drift.nodeDrift
	}),
	'POST /nodes/{serial}/refresh': spec({
		summary: 'Ask for a film refresh; a person approves it',
		scope: 'refresh',
		roles: everyday,
		body: refresh.refreshIn,
		bodyOptional: true,
		answer: refresh.refreshView,
		status: 201
	}),
	'GET /refreshes': spec({
		summary: 'Film refreshes within reach, newest first',
		scope: 'refresh',
		roles: everyday,
		query: refresh.refreshQuery,
		answer: refresh.refreshList
	}),
	'GET /refreshes/{id}': spec({
		summary: 'A film refresh: every step, and its proof',
		scope: 'refresh',
		roles: everyday,
		answer: refresh.refreshView
	}),
	'POST /refreshes/{id}/call-off': spec({
		summary: 'Call a film refresh off',
		scope: 'refresh',
		roles: everyday,
		body: refresh.callOffIn,
		bodyOptional: true,
		answer: refresh.refreshView
	}),
	'GET /openapi.json': spec({
		summary: 'This description, as OpenAPI 3.1',
		scope: 'none',
		query: none
	})
} as const;

export type RouteName = keyof typeof ROUTES;

/** Other media that a route's answer comes in. */
export const GEOJSON_ANSWER = featureCollection;
