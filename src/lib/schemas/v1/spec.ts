import type { z } from 'zod';
import type { Role, Scope } from '../roles';

/** What is checked before a handler runs, and what openapi.json says of it. */
export interface RouteSpec<
	Q extends z.ZodType = z.ZodType,
	B extends z.ZodType | null = z.ZodType | null
> {
	readonly summary: string;
	/** Scope a key needs; 'any' living key; 'none' = nobody is asked; null = people only, no key. */
	readonly scope: Scope | 'any' | 'none' | null;
	/** Roles of people; left out: the roles whose scopes hold `scope`. */
	readonly roles?: readonly Role[];
	/** Left out: no query parameter at all is taken. */
	readonly query?: Q;
	/** Left out: no body is read. */
	readonly body?: B;
	/** A body may be left out (read as {}). */
	readonly bodyOptional?: boolean;
	/** `application/geo+json` is given on Accept and taken as a body. */
	readonly geojson?: boolean;
	readonly answer?: z.ZodType;
	/** What a success answers; 200 when left out. */
	readonly status?: 200 | 201 | 204;
	/** 'change': ETag from the site's change id; 'body' (when left out): from the bytes; 'none'. */
	readonly stamp?: 'change' | 'body' | 'none';
	/** Deciding needs all sites, not a list of them. */
	readonly allSites?: boolean;
}

/** Keeps the literal types of a spec. */
export const spec = <const S extends RouteSpec>(s: S): S => s;
