import { decimal, milligauss } from '$lib/format/field';
import { dossierWords } from '$lib/format/messages/dossier';
import type { EarthCheck } from '$lib/schemas/desk-parameters';

/** The Earth check in words (method 8): what was found, and what to do about it. */
export function earthText(check: EarthCheck): { head: string; advice: string | null } {
	const said = dossierWords().earth;
	const { quietMg, ratio, verdict, earthMg } = check;
	if (verdict === 'not_learned' || (quietMg === null && verdict !== 'no_offset'))
		return { head: said.notLearned, advice: null };
	if (verdict === 'no_offset' || quietMg === null || ratio === null)
		return { head: said.noOffset, advice: null };
	const share = Math.round(100 * Math.abs(ratio - 1));
	const head = said.head(milligauss(quietMg), decimal(ratio, 2), milligauss(earthMg));
	if (verdict === 'wrong_resolution')
		return {
			head: said.wrong(head, ratio > 1 ? '4' : '1/4'),
			advice: said.wrongCure
		};
	if (verdict === 'off')
		return {
			head: said.off(head, share),
			advice: said.offCure
		};
	return { head: said.agrees(head, share), advice: null };
}
