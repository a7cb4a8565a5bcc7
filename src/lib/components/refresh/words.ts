/** What people read for the steps of a film refresh. */
const STATES: Readonly<Record<string, string>> = {
	asked: 'asked for',
	approved: 'approved',
	waiting: 'waits',
	sent: 'sent, no answer yet',
	obeyed: 'pulsed, being measured',
	measured: 'measured',
	proved: 'proved',
	not_cured: 'not cured',
	refused: 'refused',
	expired: 'expired',
	called_off: 'called off'
};
export const stateWords = (state: string): string => STATES[state] ?? state.replaceAll('_', ' ');

/** What holds one back, after 'waits for'. */
const WAITS: Readonly<Record<string, string>> = {
	paused: 'its bulk order to go on',
	withdrawn: 'the node to be in service',
	never_heard: 'the node to be heard for the first time',
	storm: 'the nodes that fell silent together to be heard',
	silent: 'the silent node to be heard',
	bay_taken: 'an empty bay',
	bay_not_known: 'the bay to be known as free',
	just_left: 'a minute of an empty bay',
	quiet_hours: 'the quiet hours',
	battery_low: 'a cell above the floor for a pulse',
	battery_not_known: 'the voltage of the cell to be told',
	pulse_within_hour: 'an hour since the last pulse',
	hold_off: 'the hold-off since the last film refresh',
	site_busy: 'others of this site to be done'
};
export const waitWords = (guard: string): string => WAITS[guard] ?? guard.replaceAll('_', ' ');

const OPEN = ['asked', 'approved', 'waiting', 'sent', 'obeyed', 'measured'];
export const isOpen = (state: string): boolean => OPEN.includes(state);

/** '01:00' of minutes since midnight, and back (null when it is no time). */
export const clockOf = (minute: number): string =>
	`${String(Math.floor(minute / 60)).padStart(2, '0')}:${String(minute % 60).padStart(2, '0')}`;
export function minuteOf(clock: string): number | null {
	const [, h, m] = /^([01]\d|2[0-3]):([0-5]\d)$/.exec(clock) ?? [];
	return h === undefined || m === undefined ? null : Number(h) * 60 + Number(m);
}

/** '0.05 days', '40 min': how much of the cell's life a charge is. */
export const lifeWords = (days: number): string =>
	days >= 1 ? `${days.toFixed(1)} days` : `${Math.max(1, Math.round(days * 1440))} min`;
