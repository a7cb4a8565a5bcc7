/** Limits of film refreshes (method 7) that no site may change; those it may stand in settings.ts. */
export const REFRESH_PARAMS = {
	/** An order that could not be carried out in this time ends. Method 7. */
	expiresMs: 14 * 86_400_000,
	/** No pulse of any cause within this before another. Method 7, 'none other within 1 h'. */
	spacingMs: 3_600_000,
	/** How long a command may wait for its node: longer, and the bay may be taken when it fires. */
	commandMs: 600_000,
	/** A command that timed out may still be answered for as long: the answer was on its way. */
	graceMs: 60_000,
	/** The pair is sent before its ack: figures that have not come by then are lost. */
	figuresMs: 600_000,
	/** Attempts whose pulse failed or whose figures were lost. */
	mostAttempts: 3,
	/** Method 7: 'at least 60'. */
	stillReadings: 60,
	/** Nothing is judged from the pulse to this after it. Method 2. */
	pulseQuietMs: 2_000,
	/** The bay must have stood empty for this: a driver may still be turning in. */
	emptyForMs: 60_000,
	/** Noise may be this much worse. Method 7. */
	noiseRatio: 1.5,
	/** Below this two noises are told apart by chance only, mG. */
	noiseFloorMg: 1,
	/** Gain off by this share at reference temperature sends a person. Method 7. */
	gainShare: 0.03,
	/** `after` repeats `set` within this many sigma of a difference, at least 4 mG. Method 2. */
	repeatSigmas: 4 * Math.SQRT2,
	repeatLeastMg: 4,
	/** Method 7: 'not cured twice = a visit'. */
	notCuredForVisit: 2
} as const;

export type RefreshParams = Record<keyof typeof REFRESH_PARAMS, number>;
