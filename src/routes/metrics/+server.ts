import { createHash, timingSafeEqual } from 'node:crypto';
import type { RequestHandler } from '@sveltejs/kit';
import { instance } from '$lib/server/api/instance';
import { metrics } from '$lib/server/api/metrics';
import { problem, problemResponse } from '$lib/server/api/problem';
import { bearerOf } from '$lib/server/auth/api-key';

const digest = (text: string): Buffer => createHash('sha256').update(text).digest();

/** Prometheus text, by LODEKEEP_METRICS_TOKEN as Bearer; without that setting there is no such page. */
export const GET: RequestHandler = async ({ request }) => {
	const { metricsToken } = instance().config;
	if (metricsToken === null) return problemResponse(problem(404, 'Metrics are switched off.'));
	const given = bearerOf(request.headers.get('authorization'));
	if (given === null || !timingSafeEqual(digest(given), digest(metricsToken))) {
		const challenge = { 'www-authenticate': 'Bearer realm="metrics"' };
		return problemResponse(problem(401, 'Send the metrics token.', { headers: challenge }));
	}
	const { registry } = metrics();
	return new Response(await registry.metrics(), {
		headers: { 'content-type': registry.contentType, 'cache-control': 'no-store' }
	});
};
