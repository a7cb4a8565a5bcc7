/** Given up after two days: a mail server that is down over a night or a day loses nothing. */
export const GIVE_UP_MS = 48 * 3_600_000;
const FIRST_MS = 15_000;
const LONGEST_MS = 3_600_000;

/** Doubling from 15 s to an hour, spread by half either way so that many do not come back together. */
export function backoffMs(tries: number, random: () => number = Math.random): number {
	const plain = Math.min(LONGEST_MS, FIRST_MS * 2 ** Math.min(20, Math.max(0, tries - 1)));
	return Math.round(plain * (0.5 + random()));
}
