import type { NoticeFacts, NoticeKind } from '$lib/schemas/notices';
import { ranked, rankOf } from './kinds';

/** What stands in need of a notice now: a node, a site, a storm or an address. */
export interface Subject {
	/** 'node:<id>', 'site:<id>', 'storm:…', 'mail:<person>'. */
	about: string;
	siteId: number | null;
	nodeId: number | null;
	bayId: number | null;
	kinds: readonly NoticeKind[];
	sinceMs: number;
	facts: NoticeFacts;
}

export interface OpenNotice {
	id: number;
	about: string;
	kind: NoticeKind;
	kinds: readonly NoticeKind[];
	awaitsProof: boolean;
	openedAtMs: number;
	/** As stored: JSON text. */
	facts: string;
}

export type End = 'healed' | 'proved' | 'removed' | 'folded';

/** A notice that closed by itself a short while ago. */
export interface Healed {
	id: number;
	kind: NoticeKind;
	times: number;
	closedAtMs: number;
	deadlineMs: number;
}

export type Step =
	| { do: 'open'; subject: Subject; kind: NoticeKind; kinds: NoticeKind[] }
	/** It is back: the same notice goes on, so that one that comes and goes is told once. */
	| { do: 'reopen'; subject: Subject; healed: Healed; kind: NoticeKind; kinds: NoticeKind[] }
	| {
			do: 'change';
			notice: OpenNotice;
			kind: NoticeKind;
			kinds: NoticeKind[];
			awaitsProof: boolean;
			facts: NoticeFacts | null;
			/** The kind is more serious than the one told. */
			worse: boolean;
			/** What it waits for has ended, only the proof is missing. */
			onlyProof: boolean;
	  }
	| { do: 'close'; notice: OpenNotice; how: End };

export interface Known {
	/** When a film refresh of a subject was last proved. */
	provedAtMs: ReadonlyMap<string, number>;
	/** Subjects that are no more: node withdrawn or out of its bay. */
	gone: ReadonlySet<string>;
	/** Subjects told together with others now. */
	folded: ReadonlySet<string>;
	/** By subject, the notice of it that healed within the last day. */
	healed: ReadonlyMap<string, Healed>;
}

/**
 * What is to be done so that the open notices tell what holds: one a subject, its kind the most serious.
 * A notice closes by itself when its conditions end; one that told of a film refresh due only by proof.
 */
export function reconcile(
	open: readonly OpenNotice[],
	subjects: readonly Subject[],
	known: Known
): Step[] {
	const present = new Map(subjects.map((subject) => [subject.about, subject]));
	const steps: Step[] = [];
	for (const notice of open) {
		const subject = present.get(notice.about) ?? null;
		present.delete(notice.about);
		const step = stepOf(notice, subject, known);
		if (step !== null) steps.push(step);
	}
	for (const subject of present.values()) {
		const kinds = ranked(subject.kinds);
		const kind = kinds[0];
		if (kind === undefined) continue;
		const healed = known.healed.get(subject.about);
		steps.push(
			healed === undefined
				? { do: 'open', subject, kind, kinds }
				: { do: 'reopen', subject, healed, kind, kinds }
		);
	}
	return steps;
}

function stepOf(notice: OpenNotice, subject: Subject | null, known: Known): Step | null {
	if (known.gone.has(notice.about)) return { do: 'close', notice, how: 'removed' };
	const held = subject?.kinds ?? [];
	const provedAtMs = known.provedAtMs.get(notice.about) ?? null;
	const proved = provedAtMs !== null && provedAtMs >= notice.openedAtMs;
	const waits = notice.awaitsProof && !proved;
	if (held.length === 0 && !waits) {
		const folded = known.folded.has(notice.about);
		return {
			do: 'close',
			notice,
			how: folded ? 'folded' : notice.awaitsProof ? 'proved' : 'healed'
		};
	}
	const kinds = ranked(waits ? [...held, 'refresh_due'] : held);
	return changeOf(notice, subject, kinds);
}

function changeOf(notice: OpenNotice, subject: Subject | null, kinds: NoticeKind[]): Step | null {
	const kind = kinds[0] ?? notice.kind;
	const facts = subject?.facts ?? null;
	const sameFacts = facts === null || JSON.stringify(facts) === notice.facts;
	const sameKinds = kinds.join() === notice.kinds.join();
	if (sameFacts && sameKinds) return null;
	return {
		do: 'change',
		...{ notice, kind, kinds, facts: sameFacts ? null : facts },
		awaitsProof: kinds.includes('refresh_due'),
		worse: rankOf(kind) < rankOf(notice.kind),
		onlyProof: subject === null && !sameKinds
	};
}
