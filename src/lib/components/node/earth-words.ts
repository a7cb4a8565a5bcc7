import { milligauss } from '$lib/format/field';
import type { EarthCheck } from '$lib/schemas/desk-parameters';

/** The Earth check in words (method 8): what was found, and what to do about it. */
export function earthText(check: EarthCheck): { head: string; advice: string | null } {
	const { quietMg, ratio, verdict, earthMg } = check;
	if (verdict === 'not_learned' || (quietMg === null && verdict !== 'no_offset'))
		return { head: 'No quiet field is learned yet.', advice: null };
	if (verdict === 'no_offset' || quietMg === null || ratio === null)
		return { head: 'Off: no pair has measured the sensor’s own offset yet.', advice: null };
	const share = Math.round(100 * Math.abs(ratio - 1));
	const head = `Quiet field ${milligauss(quietMg)}, ${ratio.toFixed(2)} of the Earth’s ${milligauss(earthMg)}`;
	if (verdict === 'wrong_resolution')
		return {
			head: `${head}: ratio near ${ratio > 1 ? '4' : '1/4'}: wrong resolution.`,
			advice:
				'The profile of the other resolution was chosen. Set the right profile before this reference is accepted.'
		};
	if (verdict === 'off')
		return {
			head: `${head}: ${share} % off, more than 35 %.`,
			advice:
				'Buried steel can do this. Look at the bay and the profile before this reference is accepted.'
		};
	return { head: `${head}: ${share} % off, as it should be.`, advice: null };
}
