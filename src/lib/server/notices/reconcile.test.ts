import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { NOTICE_KINDS, defaultSettings, type NoticeKind } from '$lib/schemas/notices';
import { NOTICE_KINDS as STORED_KINDS } from '$lib/server/store/schema';
import { escalation } from './escalate';
import { ranked } from './kinds';
import type { Recipient } from './people';
import { reconcile, type Known, type OpenNotice, type Subject } from './reconcile';

const known = (more: Partial<Known> = {}): Known => ({
	...{ provedAtMs: new Map(), gone: new Set<string>(), folded: new Set<string>() },
	healed: new Map(),
	...more
});
const subject = (about: string, ...kinds: NoticeKind[]): Subject => ({
	...{ about, siteId: 1, nodeId: 7, bayId: 7, kinds, sinceMs: 0, facts: {} }
});
const open = (about: string, ...kinds: NoticeKind[]): OpenNotice => ({
	...{ id: 1, about, kind: kinds[0]!, kinds, openedAtMs: 1_000, facts: '{}' },
	awaitsProof: kinds.includes('refresh_due')
});

test('the table stores the kinds that the product knows', () => {
	expect([...STORED_KINDS]).toEqual([...NOTICE_KINDS]);
});

describe('one open notice a node (issue 6)', () => {
	test('its kind is the most serious of what holds', () => {
		const [step] = reconcile([], [subject('node:7', 'low_cell', 'drifting', 'inverted')], known());
		expect(step).toMatchObject({ do: 'open', kind: 'inverted' });
	});
	test('a more serious condition changes the notice, a second one is not opened', () => {
		const steps = reconcile(
			[open('node:7', 'drifting')],
			[subject('node:7', 'drifting', 'clipped')],
			known()
		);
		expect(steps).toMatchObject([{ do: 'change', kind: 'clipped', worse: true }]);
	});
	test('it closes by itself when its condition ends', () => {
		expect(reconcile([open('node:7', 'silent')], [], known())).toMatchObject([
			{ do: 'close', how: 'healed' }
		]);
	});
	test('film refresh due waits for its proof', () => {
		expect(reconcile([open('node:7', 'refresh_due')], [], known())).toEqual([]);
		const before = known({ provedAtMs: new Map([['node:7', 999]]) });
		expect(reconcile([open('node:7', 'refresh_due')], [], before)).toEqual([]);
		const after = known({ provedAtMs: new Map([['node:7', 1_001]]) });
		expect(reconcile([open('node:7', 'refresh_due')], [], after)).toMatchObject([
			{ do: 'close', how: 'proved' }
		]);
	});
	test('a node taken out closes it without a proof', () => {
		const gone = known({ gone: new Set(['node:7']) });
		expect(reconcile([open('node:7', 'refresh_due')], [], gone)).toMatchObject([
			{ do: 'close', how: 'removed' }
		]);
	});
	test('what is back within a day is the same notice again, not a new one', () => {
		const healed = { id: 9, kind: 'silent', times: 2, closedAtMs: 500, deadlineMs: 900 } as const;
		expect(
			reconcile([], [subject('node:7', 'silent')], known({ healed: new Map([['node:7', healed]]) }))
		).toMatchObject([{ do: 'reopen', kind: 'silent', healed: { id: 9, times: 2 } }]);
	});
	test('what is told together with others is folded', () => {
		const folded = known({ folded: new Set(['node:7']) });
		expect(reconcile([open('node:7', 'silent')], [], folded)).toMatchObject([
			{ do: 'close', how: 'folded' }
		]);
	});
	test('after any sequence of conditions exactly the subjects that hold, or wait for proof, are open', () => {
		const kinds = fc.uniqueArray(fc.constantFrom(...NOTICE_KINDS), { maxLength: 4 });
		fc.assert(
			fc.property(fc.array(fc.dictionary(fc.constantFrom('node:1', 'node:2'), kinds)), (rounds) => {
				let notices = new Map<string, OpenNotice>();
				for (const round of rounds) {
					const subjects = Object.entries(round)
						.filter(([, held]) => held.length > 0)
						.map(([about, held]) => subject(about, ...held));
					notices = play(notices, subjects);
					for (const { about, kinds: held } of subjects)
						expect(notices.get(about)?.kind).toBe(
							ranked([
								...held,
								...(notices.get(about)?.awaitsProof === true ? ['refresh_due' as const] : [])
							])[0]
						);
					for (const notice of notices.values())
						expect(notice.awaitsProof || subjects.some(({ about }) => about === notice.about)).toBe(
							true
						);
					// Told once: a second look at the same finds nothing to do.
					expect(reconcile([...notices.values()], subjects, known())).toEqual([]);
				}
			})
		);
	});
});

function play(before: ReadonlyMap<string, OpenNotice>, subjects: Subject[]) {
	const notices = new Map(before);
	for (const step of reconcile([...before.values()], subjects, known())) {
		if (step.do === 'open' || step.do === 'reopen')
			notices.set(step.subject.about, open(step.subject.about, ...step.kinds));
		else if (step.do === 'close') notices.delete(step.notice.about);
		else
			notices.set(step.notice.about, {
				...step.notice,
				...{ kind: step.kind, kinds: step.kinds, awaitsProof: step.awaitsProof }
			});
	}
	return notices;
}

describe('what nobody takes goes on', () => {
	const person = (id: number, role: Recipient['role'], deputyId: number | null): Recipient => ({
		...{ id, role, email: '', name: '', initials: '', demo: false, language: 'en', timezone: null },
		sites: 'all',
		settings: { ...defaultSettings(role), deputyId }
	});
	const fitter = person(1, 'maintenance', 2);
	const people = [fitter, person(2, 'operator', null), person(3, 'admin', null)];
	const notice = { stage: 0, kind: 'clipped' as const, siteId: 1 };
	test('to the deputy that the people told have named, then to the admins', () => {
		expect(escalation(notice, people)).toMatchObject({ stage: 1, people: [{ id: 2 }] });
		expect(escalation({ ...notice, stage: 1 }, people)).toMatchObject({
			stage: 2,
			people: [{ id: 3 }]
		});
	});
	test('without a deputy straight to the admins', () => {
		const plain = [{ ...fitter, settings: defaultSettings('maintenance') }, ...people.slice(1)];
		expect(escalation(notice, plain)).toMatchObject({ stage: 2, people: [{ id: 3 }] });
	});
});
