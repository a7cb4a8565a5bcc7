/** Closed lists of visits (tables: server/store/schema/visit.ts) and what follows from a cause; pure. */
export const VISIT_CAUSES = [
	'not_cured',
	'silent',
	'clipped',
	'low_cell',
	'swap',
	'by_hand'
] as const;
export type VisitCause = (typeof VISIT_CAUSES)[number];

export const VISIT_OUTCOMES = [
	'cured',
	'cell_changed',
	'node_swapped',
	'obstacle_removed',
	'to_be_swapped',
	'nothing_found',
	'not_reached',
	'other'
] as const;
export type VisitOutcome = (typeof VISIT_OUTCOMES)[number];

/** The bay has been seen to: the request ends and its notices are settled. The others leave it open. */
export const endsRequest = (outcome: VisitOutcome): boolean =>
	outcome !== 'to_be_swapped' && outcome !== 'not_reached';

export const CHECKS = [
	'area_secured',
	'node_found',
	'cover_sound',
	'nothing_over_it',
	'steel_looked_for',
	'steel_taken_away',
	'cell_measured',
	'cell_changed',
	'seal_clean',
	'old_cell_packed',
	'serials_read',
	'services_checked',
	'sits_level',
	'bay_seen_empty',
	'heard_again',
	'as_asked'
] as const;
export type VisitCheck = (typeof CHECKS)[number];

const FIRST: readonly VisitCheck[] = ['area_secured', 'node_found'];
const BY_CAUSE: Record<VisitCause, readonly VisitCheck[]> = {
	silent: ['nothing_over_it', 'cover_sound', 'cell_measured', 'seal_clean', 'heard_again'],
	low_cell: ['cell_measured', 'cell_changed', 'seal_clean', 'old_cell_packed', 'heard_again'],
	clipped: ['steel_looked_for', 'steel_taken_away', 'bay_seen_empty'],
	not_cured: ['sits_level', 'steel_looked_for', 'bay_seen_empty'],
	swap: [
		'services_checked',
		'serials_read',
		'sits_level',
		'seal_clean',
		'old_cell_packed',
		'bay_seen_empty',
		'heard_again'
	],
	by_hand: ['as_asked']
};

/** What is to be done at a stop, each once, in the order of the list of checks. */
export function checksOf(causes: readonly VisitCause[]): VisitCheck[] {
	const wanted = new Set([...FIRST, ...causes.flatMap((cause) => BY_CAUSE[cause])]);
	return CHECKS.filter((check) => wanted.has(check));
}

export const PARTS = ['cell', 'node', 'seal', 'cover', 'screws'] as const;
export type VisitPart = (typeof PARTS)[number];

/** A cell is opened there: the caution on lithium stands first. */
export const opensCell = (causes: readonly VisitCause[]): boolean =>
	causes.some((cause) => cause === 'silent' || cause === 'low_cell' || cause === 'swap');

export const TOOLS = [
	'warning_gear',
	'cover_key',
	'torch_brush',
	'voltmeter',
	'seal_grease',
	'cell_bags',
	'compass',
	'level',
	'services_plan'
] as const;
export type VisitTool = (typeof TOOLS)[number];

const ALWAYS: readonly VisitTool[] = ['warning_gear', 'cover_key', 'torch_brush'];
const TOOLS_OF: Record<VisitCause, readonly VisitTool[]> = {
	silent: ['voltmeter', 'seal_grease', 'cell_bags'],
	low_cell: ['voltmeter', 'seal_grease', 'cell_bags'],
	clipped: ['compass'],
	not_cured: ['compass', 'level'],
	swap: ['level', 'seal_grease', 'cell_bags', 'services_plan'],
	by_hand: []
};
/** Causes whose stop may come down to a new node. */
const MAY_SWAP: readonly VisitCause[] = ['silent', 'not_cured', 'swap'];
/** Causes whose stop may want a new cell. */
const MAY_CHANGE_CELL: readonly VisitCause[] = ['silent', 'low_cell'];

export interface LoadStop {
	causes: readonly VisitCause[];
	/** Sensor profile of the node there; null where no node lies. */
	profile: string | null;
}
export interface LoadList {
	/** New cells, and seals with them. */
	cells: number;
	seals: number;
	/** By sensor profile, by its code. */
	spareNodes: { profile: string; count: number }[];
	tools: VisitTool[];
}

/** What to load for these stops: enough for the worst of each cause, nothing twice. */
export function loadListOf(stops: readonly LoadStop[]): LoadList {
	const cells = stops.filter(({ causes }) => causes.some((c) => MAY_CHANGE_CELL.includes(c)));
	const nodes = new Map<string, number>();
	for (const { causes, profile } of stops)
		if (profile !== null && causes.some((c) => MAY_SWAP.includes(c)))
			nodes.set(profile, (nodes.get(profile) ?? 0) + 1);
	const tools = new Set([
		...ALWAYS,
		...stops.flatMap(({ causes }) => causes.flatMap((c) => TOOLS_OF[c]))
	]);
	return {
		cells: cells.length,
		seals: stops.filter(({ causes }) => opensCell(causes)).length,
		spareNodes: [...nodes]
			.map(([profile, count]) => ({ profile, count }))
			.sort((a, b) => a.profile.localeCompare(b.profile)),
		tools: TOOLS.filter((tool) => tools.has(tool))
	};
}
