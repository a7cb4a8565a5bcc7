import {
	kept,
	moved,
	refused,
	type Course,
	type Of,
	type RefreshEvent,
	type Stepped
} from './course';
import type { RefreshParams } from './params';

/** From the pulse to the verdict: still readings of an empty bay, then the judgement (method 7). */
export function prove(course: Course, event: RefreshEvent, params: RefreshParams): Stepped {
	const inObeyed = course.state === 'obeyed';
	if (event.kind === 'judged')
		return inObeyed ? refused('not_in_this_state') : judge(course, event, params);
	if (!inObeyed) return refused('not_in_this_state');
	switch (event.kind) {
		case 'pulsed':
			return pulsed(course, event, params);
		case 'figures_lost':
			return figuresLost(course, event.atMs, params);
		case 'vehicle':
		case 'empty':
			return bayMoved(course, event);
		case 'counted':
			return counted(course, event, params);
		default:
			return refused('not_in_this_state');
	}
}

function pulsed(course: Course, event: Of<'pulsed'>, params: RefreshParams): Stepped {
	if (event.commandId !== course.commandId) return refused('another_command');
	if (course.pulseAtMs !== null) return refused('known_already');
	const { pulseAtMs } = event;
	const measureFromMs = pulseAtMs + params.pulseQuietMs;
	return kept({ ...course, pulseAtMs, measureFromMs }, [{ kind: 'report_fast' }]);
}

/** It pulsed, and nobody can say what that did: once more, later, with an id of its own. */
function figuresLost(course: Course, atMs: number, params: RefreshParams): Stepped {
	if (course.pulseAtMs !== null) return refused('not_in_this_state');
	if (course.attempts >= params.mostAttempts)
		return moved(course, {
			to: 'not_cured',
			by: 'rule',
			why: `${course.attempts} pulses told nothing: their figures never came`,
			atMs
		});
	return moved(course, {
		to: 'waiting',
		by: 'rule',
		why: 'obeyed, but its figures never came: nothing is proved',
		atMs,
		change: { commandId: null, boot: null, obeyedAtMs: null }
	});
}

/** A vehicle during the quiet measurement: what was counted is dropped, and it begins anew when it has left. */
function bayMoved(course: Course, event: Of<'vehicle' | 'empty'>): Stepped {
	if (course.measureFromMs === null) return refused('not_in_this_state');
	const { atMs } = event;
	if (event.kind === 'vehicle') {
		if (course.disturbed) return refused('known_already');
		return moved(course, {
			to: 'obeyed',
			by: 'rule',
			why: 'the bay is not empty: still readings are counted anew once it is',
			atMs,
			change: { disturbed: true, stillReadings: 0 },
			effects: [{ kind: 'report_usual' }]
		});
	}
	if (!course.disturbed) return refused('known_already');
	return moved(course, {
		to: 'obeyed',
		by: 'rule',
		why: 'the bay is empty: still readings are counted',
		atMs,
		change: { disturbed: false, measureFromMs: Math.max(course.measureFromMs, event.sinceMs) },
		effects: [{ kind: 'report_fast' }]
	});
}

function counted(course: Course, event: Of<'counted'>, params: RefreshParams): Stepped {
	const { stillReadings, atMs } = event;
	if (course.measureFromMs === null || course.disturbed) return refused('not_in_this_state');
	if (stillReadings < params.stillReadings)
		return stillReadings === course.stillReadings
			? refused('known_already')
			: kept({ ...course, stillReadings });
	return moved(course, {
		to: 'measured',
		by: 'rule',
		why: `${stillReadings} still readings after the pulse`,
		atMs,
		change: { stillReadings },
		effects: [{ kind: 'report_usual' }]
	});
}

function judge(course: Course, event: Of<'judged'>, params: RefreshParams): Stepped {
	const { cured, verdict, atMs } = event;
	const again = !cured && event.notCuredBefore + 1 >= params.notCuredForVisit;
	const visitWanted = event.visit || again;
	const why = again ? `not cured twice, a third pulse would not help: ${verdict}` : verdict;
	return moved(course, {
		to: cured ? 'proved' : 'not_cured',
		by: 'rule',
		why: verdict,
		atMs,
		change: { visitWanted },
		effects: visitWanted ? [{ kind: 'send_someone', why }] : []
	});
}
