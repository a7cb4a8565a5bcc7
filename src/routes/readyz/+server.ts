import { instance } from '$lib/server/api/instance';
import { readiness } from '$lib/server/api/ready';

/** Ready: database, broker and subscriber. 503 names what is not. */
export const GET = async (): Promise<Response> => {
	const parts = await readiness(instance());
	const ready = parts.database && parts.broker && parts.subscriber;
	return Response.json(
		{ status: ready ? 'ready' : 'not_ready', ...parts },
		{ status: ready ? 200 : 503, headers: { 'cache-control': 'no-store' } }
	);
};
