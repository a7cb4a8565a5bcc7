import {
	isEnded,
	moved,
	kept,
	refused,
	type Course,
	type Effect,
	type Of,
	type RefreshEvent,
	type RefreshState,
	type Stepped
} from './course';
import type { RefreshParams } from './params';
import { prove } from './proving';

/** What must be undone when it ends by itself or by a person: nobody sends a pulse that nobody waits for. */
function loosening({ state, commandId }: Course): Effect[] {
	const effects: Effect[] = [];
	if (commandId !== null && (state === 'sent' || state === 'waiting'))
		effects.push({ kind: 'give_up_command', commandId });
	if (state === 'obeyed') effects.push({ kind: 'report_usual' });
	return effects;
}

/**
 * One event of a film refresh's life. Pure; an event that does not belong here changes nothing and says
 * why, so that doubled, late and foreign answers do no harm.
 */
export function step(course: Course, event: RefreshEvent, params: RefreshParams): Stepped {
	if (isEnded(course.state)) return afterEnd(course, event);
	switch (event.kind) {
		case 'approve':
		case 'refuse':
			return decide(course, event);
		case 'call_off':
			return moved(course, {
				to: 'called_off',
				by: event.by,
				why: event.why,
				atMs: event.atMs,
				effects: loosening(course)
			});
		case 'tick':
			return expire(course, event.atMs, params);
		case 'take_up':
		case 'blocked':
		case 'clear':
			return wait(course, event);
		case 'answered':
			return answered(course, event, params);
		case 'rebooted':
		case 'lapsed':
			return unanswered(course, event);
		default:
			return course.state === 'obeyed' || course.state === 'measured'
				? prove(course, event, params)
				: refused('not_in_this_state');
	}
}

/** A command that was called off may be on its way: when the node obeys all the same, that is kept. */
function afterEnd(course: Course, event: RefreshEvent): Stepped {
	const late =
		event.kind === 'answered' && event.outcome === 0 && event.commandId === course.commandId;
	if (!late) return refused('ended');
	if (course.obeyedAtMs !== null) return refused('known_already');
	return moved(course, {
		to: course.state,
		by: 'node',
		why: 'the node had the command already and obeyed it all the same',
		atMs: event.atMs,
		change: { obeyedAtMs: event.atMs }
	});
}

function decide(course: Course, event: Of<'approve' | 'refuse'>): Stepped {
	if (course.state !== 'asked') return refused('not_in_this_state');
	const { by, atMs } = event;
	if (event.kind === 'refuse') return moved(course, { to: 'refused', by, why: event.why, atMs });
	if (by === course.askedBy && !event.ownAllowed) return refused('own_request');
	return moved(course, {
		to: 'approved',
		by,
		why: event.anyHour ? 'at any hour' : 'in quiet hours',
		atMs,
		change: { anyHour: event.anyHour }
	});
}

function expire(course: Course, atMs: number, params: RefreshParams): Stepped {
	if (atMs - course.askedAtMs < params.expiresMs) return refused('not_in_this_state');
	const WHY: Partial<Record<RefreshState, string>> = {
		asked: 'nobody approved it in 14 days',
		obeyed: 'the pulse was fired, but the bay was never quiet for long enough to prove it'
	};
	return moved(course, {
		to: 'expired',
		by: 'rule',
		why: WHY[course.state] ?? 'it could not be carried out in 14 days',
		atMs,
		effects: loosening(course)
	});
}

function wait(course: Course, event: Of<'take_up' | 'blocked' | 'clear'>): Stepped {
	const { state } = course;
	if (event.kind === 'take_up') {
		if (state !== 'approved') return refused('not_in_this_state');
		return moved(course, { to: 'waiting', by: 'rule', why: 'waits for its chance', ...at(event) });
	}
	if (state !== 'waiting') return refused('not_in_this_state');
	if (event.kind === 'blocked')
		return event.guard === course.waitsFor
			? refused('known_already')
			: kept({ ...course, waitsFor: event.guard, waitsSinceMs: event.atMs });
	const again = course.commandId !== null;
	const commandId = course.commandId ?? event.freshId;
	return moved(course, {
		to: 'sent',
		by: 'rule',
		why: again ? 'the same command once more, for the boot of now' : 'every guard lets it pass',
		...at(event),
		change: {
			commandId,
			boot: event.boot,
			sentAtMs: event.atMs,
			attempts: course.attempts + (again ? 0 : 1)
		},
		effects: [{ kind: again ? 'order_again' : 'order_pair', commandId, boot: event.boot }]
	});
}

const at = ({ atMs }: { atMs: number }) => ({ atMs });

/** The node's own word. It counts as long as the attempt is open, however late it comes. */
function answered(course: Course, event: Of<'answered'>, params: RefreshParams): Stepped {
	if (event.commandId !== course.commandId) return refused('another_command');
	if (course.state !== 'sent' && course.state !== 'waiting') return refused('known_already');
	const { atMs } = event;
	if (event.outcome === 0)
		return moved(course, {
			to: 'obeyed',
			by: 'node',
			why: course.state === 'waiting' ? 'obeyed; its answer came late' : 'obeyed',
			atMs,
			change: { obeyedAtMs: atMs }
		});
	const why = event.reason ?? 'no reason given';
	if (event.outcome === 1)
		return moved(course, { to: 'refused', by: 'node', why: `the node refused: ${why}`, atMs });
	if (course.attempts >= params.mostAttempts)
		return moved(course, {
			to: 'refused',
			by: 'node',
			why: `failed ${course.attempts} times: ${why}`,
			atMs
		});
	return moved(course, {
		to: 'waiting',
		by: 'node',
		why: `the pulse failed: ${why}`,
		atMs,
		// A node answers a known id with the same outcome for ever: the next attempt needs its own.
		change: { commandId: null, boot: null }
	});
}

/** Whether it was obeyed nobody knows: the next time it goes out it is the same id. */
function unanswered(course: Course, event: Of<'rebooted' | 'lapsed'>): Stepped {
	if (course.state !== 'sent') return refused('not_in_this_state');
	const why =
		event.kind === 'rebooted'
			? 'the node started anew before it answered'
			: 'no answer came in time';
	return moved(course, { to: 'waiting', by: 'rule', why, atMs: event.atMs });
}
