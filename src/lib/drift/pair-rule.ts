import { magnitude } from '$lib/magnetics/vector';
import type { NodeDrift } from './node-drift';
import type { DriftSettings } from './params';

/** A site's rule for pairs without being asked (method 5, 'Pairs by rule'). */
export type PairRule = 'calibrate' | 'diagnose' | 'never';

const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;

/** Every pair is a film refresh and is entered as one, so a rule may ask for few. */
export interface PairChance {
	nowMs: number;
	lastPairAtMs: number | null;
	/** The bay is vacant and the field still. */
	quiet: boolean;
}

/**
 * Whether a pair is due by rule. 'calibrate': weekly while all is well. 'diagnose': that, and on drift, at
 * most once in 6 h. Not while a whole site moves and nobody knows why: the pair would blame the node.
 */
export function pairDue(
	rule: PairRule,
	drift: NodeDrift,
	{ nowMs, lastPairAtMs, quiet }: PairChance,
	settings: DriftSettings
): 'calibrate' | 'diagnose' | null {
	if (rule === 'never' || !quiet || drift.line === 'cause_not_known') return null;
	const sinceMs = nowMs - (lastPairAtMs ?? -Infinity);
	if (drift.watch.driftingSinceMs !== null)
		return rule === 'diagnose' && sinceMs >= settings.diagnoseHours * HOUR_MS ? 'diagnose' : null;
	const calm = drift.last !== null && magnitude(drift.last.unexplainedMg) < settings.driftingMg;
	return calm && sinceMs >= settings.calibrateDays * DAY_MS ? 'calibrate' : null;
}
