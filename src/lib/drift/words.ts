import type { RefreshReason, VisitReason } from './refresh-need';
import type { Cause, Note } from './types';

/** What a cause is, and what is best done next, as people read it. */
export const CAUSE_WORDS: Readonly<Record<Cause, { says: string; next: string }>> = {
	temperature: { says: 'temperature, taken out', next: 'nothing to do' },
	geomagnetic: {
		says: 'geomagnetic weather over the whole site, taken out',
		next: 'nothing to do'
	},
	bridge: { says: 'the offset of bridge and electronics moved', next: 'the new offset is in use' },
	film: { says: 'the film had lost magnetization', next: 'healed by the pulse that measured it' },
	gain_or_field: {
		says: 'gain or field: weaker in the same direction',
		next: 'a visit, no pulse cures it'
	},
	tilt: { says: 'consistent with a tilt', next: 'a visit: look whether the node sits level' },
	steel_or_works: {
		says: 'steel or works near the node',
		next: 'look at the bay; a new reference once it is seen empty'
	},
	unexplained: { says: 'not explained yet', next: 'a pair tells what it is' }
};

export const NOTE_WORDS: Readonly<Record<Note, string>> = {
	slope_not_known: 'temperature slope not known yet',
	no_temperature: 'no temperature near the readings',
	no_pair: 'no pair yet: direction not known',
	few_nodes: 'too few nodes to tell geomagnetic change',
	site_change_cause_not_known: 'site-wide change, cause not known'
};

export const REFRESH_WORDS: Readonly<Record<RefreshReason, string>> = {
	clipped: 'a reading at the end of the range, no pulse since',
	over_film_limit: 'a field over what the film stands, no pulse since',
	inverted: 'the film is flipped',
	unexplained: 'unexplained drift, no pulse since it began'
};

export const VISIT_WORDS: Readonly<Record<VisitReason, string>> = {
	offset_unsteady: 'the offset jumped twice in a month',
	gain_off: 'gain still off after a pulse'
};
