/** Alive: also while the database is down. */
export const GET = (): Response =>
	Response.json({ status: 'alive' }, { headers: { 'cache-control': 'no-store' } });
