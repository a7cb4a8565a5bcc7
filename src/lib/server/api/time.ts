/** RFC 3339 in UTC with milliseconds (api.md, 'Conventions'). */
export const rfc3339 = (atMs: number): string => new Date(atMs).toISOString();
export const rfc3339OrNull = (atMs: number | null): string | null =>
	atMs === null ? null : rfc3339(atMs);
