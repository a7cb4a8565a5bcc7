import type { RefreshParams } from './params';
import { isWithin } from './local-time';

/** Everything that can hold a film refresh back, in the order in which it is told. */
export const GUARDS = [
	'paused',
	'withdrawn',
	'never_heard',
	'storm',
	'silent',
	'bay_taken',
	'bay_not_known',
	'just_left',
	'quiet_hours',
	'battery_low',
	'battery_not_known',
	'pulse_within_hour',
	'hold_off',
	'site_busy'
] as const;
export type Guard = (typeof GUARDS)[number];

export const GUARD_WORDS: Readonly<Record<Guard, string>> = {
	paused: 'the bulk order is paused',
	withdrawn: 'the node is out of service',
	never_heard: 'the node has never been heard',
	storm: 'many nodes fell silent together: commands to them wait',
	silent: 'the node is silent',
	bay_taken: 'the bay is taken',
	bay_not_known: 'whether the bay is free is not known',
	just_left: 'the bay was left a moment ago',
	quiet_hours: 'the quiet hours of the site',
	battery_low: 'the cell is under the floor for a pulse',
	battery_not_known: 'the voltage of the cell is not known',
	pulse_within_hour: 'a pulse was fired within the hour',
	hold_off: 'the last film refresh ended a short while ago',
	site_busy: 'as many pulses are under way here as are allowed at once'
};

/** What is known of a node and its bay at the moment. */
export interface GuardFacts {
	paused: boolean;
	withdrawn: boolean;
	heardBoot: number | null;
	/** It is one of many that are told together as not heard. */
	storm: boolean;
	silent: boolean;
	bay: 'vacant' | 'occupied' | 'unknown';
	/** Since when the bay has its state. */
	baySinceMs: number | null;
	anyHour: boolean;
	localMinute: number;
	quietFromMin: number;
	quietToMin: number;
	batteryMv: number | null;
	batteryFloorMv: number;
	lastPulseAtMs: number | null;
	/** End of this node's last film refresh that fired a pulse. */
	lastEndAtMs: number | null;
	holdOffMs: number;
	/** Commands of film refreshes under way at the site. */
	underWay: number;
	mostAtOnce: number;
}

type Rule = (facts: GuardFacts, nowMs: number, params: RefreshParams) => boolean;

const HOLDS: Readonly<Record<Guard, Rule>> = {
	paused: ({ paused }) => paused,
	withdrawn: ({ withdrawn }) => withdrawn,
	never_heard: ({ heardBoot }) => heardBoot === null,
	storm: ({ storm }) => storm,
	silent: ({ silent }) => silent,
	bay_taken: ({ bay }) => bay === 'occupied',
	bay_not_known: ({ bay }) => bay === 'unknown',
	just_left: ({ bay, baySinceMs }, nowMs, { emptyForMs }) =>
		bay === 'vacant' && nowMs - (baySinceMs ?? 0) < emptyForMs,
	quiet_hours: ({ anyHour, localMinute, quietFromMin, quietToMin }) =>
		!anyHour && !isWithin(localMinute, quietFromMin, quietToMin),
	battery_low: ({ batteryMv, batteryFloorMv }) => batteryMv !== null && batteryMv < batteryFloorMv,
	// A pulse may take an empty cell down for good: what is not known is not guessed.
	battery_not_known: ({ batteryMv }) => batteryMv === null,
	pulse_within_hour: ({ lastPulseAtMs }, nowMs, { spacingMs }) =>
		lastPulseAtMs !== null && nowMs - lastPulseAtMs < spacingMs,
	hold_off: ({ lastEndAtMs, holdOffMs }, nowMs) =>
		lastEndAtMs !== null && nowMs - lastEndAtMs < holdOffMs,
	site_busy: ({ underWay, mostAtOnce }) => underWay >= mostAtOnce
};

/** Guards that hold it now (method 7, 'waiting'); none = it may go. */
export const holding = (facts: GuardFacts, nowMs: number, params: RefreshParams): Guard[] =>
	GUARDS.filter((guard) => HOLDS[guard](facts, nowMs, params));

/** Those that time alone does not lift: told before a bulk order. */
const STANDING: readonly Guard[] = [
	'withdrawn',
	'never_heard',
	'silent',
	'battery_low',
	'battery_not_known'
];
export const standing = (guards: readonly Guard[]): Guard[] =>
	guards.filter((guard) => STANDING.includes(guard));
