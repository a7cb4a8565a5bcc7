/** The four roles and the five scopes (product.md 'The people', api.md 'Conventions'). */
export const ROLES = ['operator', 'maintenance', 'integrator', 'admin'] as const;
export type Role = (typeof ROLES)[number];

export const SCOPES = ['occupancy', 'telemetry', 'provision', 'refresh', 'webhooks'] as const;
export type Scope = (typeof SCOPES)[number];

/**
 * What a role may do through routes that name a scope only. Operators read everything of their
 * sites; what else they may do (settle, close, ask for a film refresh) is named route by route.
 */
export const SCOPES_OF_ROLE: Readonly<Record<Role, readonly Scope[]>> = {
	operator: ['occupancy', 'telemetry'],
	maintenance: ['occupancy', 'telemetry', 'provision', 'refresh'],
	integrator: ['occupancy', 'telemetry', 'webhooks'],
	admin: ['occupancy', 'telemetry', 'provision', 'refresh', 'webhooks']
};

export const isScope = (text: string): text is Scope =>
	(SCOPES as readonly string[]).includes(text);
