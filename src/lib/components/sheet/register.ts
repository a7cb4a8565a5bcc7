/** A row of GET /api/desk/sites. */
export interface RegisterRow {
	slug: string;
	name: string;
	timezone: string;
	demo: boolean;
	live: {
		status: 'live' | 'late' | 'lost';
		lateSince: string | null;
		nodesHeard: number;
		nodesExpected: number;
	};
	bays: number;
	taken: number;
	unknown: number;
	doubtful: number;
	silent: number;
	refreshDue: number;
	closed: number;
	heardAtMs: number | null;
}
