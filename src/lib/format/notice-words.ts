import { named } from './messages';
import { noticesWords } from './messages/notices';
import { decimal } from './field';

/** What people read of each kind of notice: on the sheet and in mail. */
export interface KindWords {
	/** Of one node or site: 'film refresh due'. */
	word: string;
	next: string;
	/** What happens if nobody acts. */
	otherwise: string;
	/** What to bring; null where nobody need go. */
	bring: string | null;
}

export function noticeWords(kind: string): KindWords {
	const said = noticesWords();
	return {
		word: named(said.kind, kind) ?? kind.replaceAll('_', ' '),
		next: named(said.next, kind) ?? said.unknownNext,
		otherwise: named(said.otherwise, kind) ?? '',
		bring: named(said.bring, kind) ?? null
	};
}

/** '3 to 6 days left', 'less than a day left', null where it is not known. */
export function daysLeft(lo: number | undefined, hi: number | undefined): string | null {
	if (lo === undefined) return null;
	const said = noticesWords();
	const [from, to] = [Math.floor(lo), hi === undefined ? null : Math.ceil(hi)];
	if (to === null) return said.orMore(from);
	if (to <= 1) return said.underADay;
	return from >= to ? said.daysLeft(to) : said.daysBetween(from, to);
}

interface StormFacts {
	count?: number | undefined;
	of?: number | undefined;
	shared?: string | undefined;
	label?: string | undefined;
}

/** 'Since 08:12, 84 of 500 nodes not heard, all by G2' */
export function stormSentence(since: string, f: StormFacts): string {
	const said = noticesWords();
	const label = f.label ?? '';
	const by =
		f.shared === 'gateway'
			? said.sharedGateway(label)
			: f.shared === 'network'
				? said.sharedNetwork(label)
				: f.shared === 'zone'
					? said.sharedZone(label)
					: said.sharedSite;
	return said.storm(since, f.count ?? 0, f.of ?? 0, by);
}

/** How a notice ended. */
export const howWords = (how: string): string => named(noticesWords().how, how) ?? how;

/** '17 mG unexplained, 3.9 mG a day more'; null where it is not known. */
export function driftLine(facts: {
	unexplainedMg?: number | undefined;
	rateMgPerDay?: number | undefined;
}): string | null {
	if (facts.unexplainedMg === undefined) return null;
	const said = noticesWords();
	const rate = facts.rateMgPerDay === undefined ? '' : said.rate(decimal(facts.rateMgPerDay, 1));
	return `${said.unexplained(facts.unexplainedMg)}${rate}`;
}
