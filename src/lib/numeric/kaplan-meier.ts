/** How long something lasted, or has lasted so far (`ended` false: right-censored). Any unit of time. */
export interface Duration {
	time: number;
	ended: boolean;
}

export interface SurvivalStep {
	time: number;
	/** Lasting at least until just before `time`. */
	atRisk: number;
	ended: number;
	/** Share that lasts longer than `time`. */
	survival: number;
	/** Greenwood's standard error of it. */
	standardError: number;
}

/**
 * Product-limit estimate (Kaplan and Meier, JASA 53 (1958) 457 [M]): one step for each time at which
 * something ended. Own code: no package at hand has it.
 */
export function kaplanMeier(durations: readonly Duration[]): SurvivalStep[] {
	const sorted = [...durations].sort((a, b) => a.time - b.time);
	const steps: SurvivalStep[] = [];
	let survival = 1;
	let greenwood = 0;
	for (let from = 0; from < sorted.length;) {
		const time = (sorted[from] as Duration).time;
		let to = from;
		let ended = 0;
		for (; sorted[to]?.time === time; to++) if (sorted[to]?.ended === true) ended++;
		const atRisk = sorted.length - from;
		if (ended > 0) {
			survival *= 1 - ended / atRisk;
			greenwood += ended === atRisk ? 0 : ended / (atRisk * (atRisk - ended));
			steps.push({ time, atRisk, ended, survival, standardError: survival * Math.sqrt(greenwood) });
		}
		from = to;
	}
	return steps;
}

/** Time by which a share of 0 to 1 has ended, or null when too few have. 0.5 gives the median. */
export function timeByShare(steps: readonly SurvivalStep[], share: number): number | null {
	return steps.find((step) => step.survival <= 1 - share + 1e-12)?.time ?? null;
}

/** Share that lasts longer than a time. */
export function survivalAt(steps: readonly SurvivalStep[], time: number): number {
	let survival = 1;
	for (const step of steps) {
		if (step.time > time) break;
		survival = step.survival;
	}
	return survival;
}

/** Mean time up to `horizon`: area under the curve. */
export function restrictedMean(steps: readonly SurvivalStep[], horizon: number): number {
	let area = 0;
	let survival = 1;
	let from = 0;
	for (const step of steps) {
		if (step.time >= horizon) break;
		area += survival * (step.time - from);
		survival = step.survival;
		from = step.time;
	}
	return area + survival * (horizon - from);
}
