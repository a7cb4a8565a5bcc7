import { ROUTES } from '$lib/schemas/v1/route-table';
import { ok } from '$lib/server/api/answer';
import { nodeKey, sealNodeKey, shownKey } from '$lib/server/api/node-keys';
import { nodeRoute } from '$lib/server/api/route';
import { rfc3339 } from '$lib/server/api/time';
import * as audit from '$lib/server/store/queries/audit';
import * as nodes from '$lib/server/store/queries/nodes';

export const POST = nodeRoute(ROUTES['POST /nodes/{serial}/key'], async (ctx) => {
	const { app, site, node, body, reach, nowMs } = ctx;
	const fresh = nodeKey(body.key);
	const untilMs = nowMs + body.overlapS * 1000;
	const written = await ctx.write(async ({ db }) => {
		const keySealed = sealNodeKey(app, node.id, fresh.key);
		await nodes.replaceKey(db, node, { keySealed, mqttHash: fresh.mqttHash }, untilMs);
		await audit.note(
			db,
			{ actor: reach.actor, siteId: site.id, what: 'node.rekeyed', subject: node.serial },
			nowMs
		);
		const shown = { ...shownKey(node.serial, fresh), oldKeyUntil: rfc3339(untilMs) };
		return ok(shown, { secret: true });
	});
	app.nudge();
	return written;
});
