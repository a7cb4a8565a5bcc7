/** Steps of a film refresh (method 7). */
export type RefreshState =
	| 'asked'
	| 'approved'
	| 'waiting'
	| 'sent'
	| 'obeyed'
	| 'measured'
	| 'proved'
	| 'not_cured'
	| 'refused'
	| 'expired'
	| 'called_off';

const ENDS: readonly RefreshState[] = ['proved', 'not_cured', 'refused', 'expired', 'called_off'];
export const isEnded = (state: RefreshState): boolean => ENDS.includes(state);

/** What the machine remembers of one film refresh: plain data, stored with every transition. */
export interface Course {
	state: RefreshState;
	askedBy: string;
	askedAtMs: number;
	anyHour: boolean;
	/** Guard that holds it, and since when. */
	waitsFor: string | null;
	waitsSinceMs: number | null;
	/** Hex id of the attempt's command. It stays until the node itself has said what became of it. */
	commandId: string | null;
	/** The boot that the command is bound to. */
	boot: number | null;
	attempts: number;
	sentAtMs: number | null;
	obeyedAtMs: number | null;
	pulseAtMs: number | null;
	measureFromMs: number | null;
	/** A vehicle came while still readings were counted. */
	disturbed: boolean;
	stillReadings: number;
	visitWanted: boolean;
	endedAtMs: number | null;
}

/** `by`: 'person:<id>', 'key:<id>', 'rule' or 'node'. Times UTC ms. */
export type RefreshEvent = { atMs: number } & (
	| { kind: 'approve'; by: string; anyHour: boolean; ownAllowed: boolean }
	| { kind: 'refuse'; by: string; why: string }
	| { kind: 'call_off'; by: string; why: string }
	| { kind: 'take_up' }
	| { kind: 'blocked'; guard: string }
	/** Every guard lets it pass; `freshId` is used when no attempt is under way. */
	| { kind: 'clear'; freshId: string; boot: number }
	| { kind: 'answered'; commandId: string; outcome: 0 | 1 | 2; reason: string | null }
	/** The node started anew before it answered. */
	| { kind: 'rebooted' }
	/** The command's time is over without an answer. */
	| { kind: 'lapsed' }
	| { kind: 'pulsed'; commandId: string; pulseAtMs: number }
	| { kind: 'figures_lost' }
	| { kind: 'vehicle' }
	| { kind: 'empty'; sinceMs: number }
	| { kind: 'counted'; stillReadings: number }
	/** `notCuredBefore`: how many film refreshes of this node in a row ended so. */
	| {
			kind: 'judged';
			cured: boolean;
			verdict: string;
			visit: boolean;
			notCuredBefore: number;
	  }
	| { kind: 'tick' }
);

/** What the caller must do in the same transaction. */
export type Effect =
	| { kind: 'order_pair'; commandId: string; boot: number }
	/** The same id again, for the present boot: a node that has obeyed it answers and fires nothing. */
	| { kind: 'order_again'; commandId: string; boot: number }
	| { kind: 'give_up_command'; commandId: string }
	| { kind: 'report_fast' }
	| { kind: 'report_usual' }
	| { kind: 'send_someone'; why: string };

export interface Transition {
	from: RefreshState;
	to: RefreshState;
	by: string;
	why: string;
}

export type NotTaken =
	'not_in_this_state' | 'own_request' | 'another_command' | 'known_already' | 'ended';

export type Stepped =
	| { ok: true; course: Course; transition: Transition | null; effects: Effect[] }
	| { ok: false; reason: NotTaken };

/** The course of a film refresh that was just asked for. */
export const begin = (askedBy: string, askedAtMs: number): Course => ({
	state: 'asked',
	askedBy,
	askedAtMs,
	anyHour: false,
	waitsFor: null,
	waitsSinceMs: null,
	commandId: null,
	boot: null,
	attempts: 0,
	sentAtMs: null,
	obeyedAtMs: null,
	pulseAtMs: null,
	measureFromMs: null,
	disturbed: false,
	stillReadings: 0,
	visitWanted: false,
	endedAtMs: null
});

export const refused = (reason: NotTaken): Stepped => ({ ok: false, reason });
export const kept = (course: Course, effects: Effect[] = []): Stepped => ({
	ok: true,
	course,
	transition: null,
	effects
});

export interface Move {
	to: RefreshState;
	by: string;
	why: string;
	atMs: number;
	change?: Partial<Course>;
	effects?: Effect[];
}

export function moved(course: Course, { to, by, why, atMs, change, effects }: Move): Stepped {
	const ended = isEnded(to);
	return {
		ok: true,
		course: {
			...course,
			waitsFor: null,
			waitsSinceMs: null,
			...change,
			state: to,
			endedAtMs: ended ? (course.endedAtMs ?? atMs) : null
		},
		transition: { from: course.state, to, by, why },
		effects: effects ?? []
	};
}

export type Of<K extends RefreshEvent['kind']> = Extract<RefreshEvent, { kind: K }>;
