import { and, desc, eq, inArray, isNotNull, lt } from 'drizzle-orm';
import {
	act,
	boot,
	closure,
	command,
	event,
	node,
	pulse,
	reference,
	visitRequest,
	visitStop
} from '../schema';
import type { Db } from './people';

/** One thing that happened to a bay or to a node in it; `what` names the kind, the rest is as stored. */
export interface TimelineRow {
	atMs: number;
	what: string;
	/** 'person:<id>', 'key:<id>', 'rule' or null. */
	by: string | null;
	serial: string | null;
	detail: Record<string, string | number | boolean | null>;
}

/** Nodes that stand in the bay now or whose reference was learned there. */
async function nodesOf(db: Db, bayId: number) {
	const [placed, learned] = await Promise.all([
		db.select({ id: node.id, serial: node.serial }).from(node).where(eq(node.bayId, bayId)),
		db
			.select({ id: node.id, serial: node.serial })
			.from(reference)
			.innerJoin(node, eq(node.id, reference.nodeId))
			.where(eq(reference.bayId, bayId))
	]);
	return new Map([...placed, ...learned].map(({ id, serial }) => [id, serial]));
}

/** The newest `limit` rows before an instant, newest first. */
export async function timeline(
	db: Db,
	bayId: number,
	beforeMs: number,
	limit: number
): Promise<TimelineRow[]> {
	const serials = await nodesOf(db, bayId);
	const [ofBay, ofNodes] = await Promise.all([
		bayRows(db, bayId, beforeMs, limit),
		serials.size === 0 ? [] : nodeRows(db, serials, beforeMs, limit)
	]);
	return [...ofBay, ...ofNodes].sort((a, b) => b.atMs - a.atMs).slice(0, limit);
}

async function bayRows(db: Db, bayId: number, beforeMs: number, limit: number) {
	const [events, acts, closures, requests, stops] = await Promise.all([
		db
			.select()
			.from(event)
			.where(and(eq(event.bayId, bayId), lt(event.recordedAtMs, beforeMs)))
			.orderBy(desc(event.atMs))
			.limit(limit),
		db
			.select()
			.from(act)
			.where(and(eq(act.bayId, bayId), lt(act.recordedAtMs, beforeMs)))
			.orderBy(desc(act.recordedAtMs))
			.limit(limit),
		db.select().from(closure).where(eq(closure.bayId, bayId)).limit(limit),
		db
			.select()
			.from(visitRequest)
			.where(eq(visitRequest.bayId, bayId))
			.orderBy(desc(visitRequest.askedAtMs))
			.limit(limit),
		db
			.select({ stop: visitStop, requestId: visitRequest.id })
			.from(visitStop)
			.innerJoin(visitRequest, eq(visitRequest.id, visitStop.requestId))
			.where(and(eq(visitRequest.bayId, bayId), isNotNull(visitStop.outcome)))
			.orderBy(desc(visitStop.endedAtMs))
			.limit(limit)
	]);
	return [
		...events.map((e) => ({
			...{ atMs: e.recordedAtMs, what: e.type, by: null, serial: null },
			detail: {
				id: e.id,
				at: e.atMs,
				state: e.state,
				late: e.late,
				uncertaintyS: e.uncertaintyS,
				voids: e.voids,
				confidence: e.confidence20 === null ? null : e.confidence20 / 20
			}
		})),
		...acts.map((a) => ({
			...{ atMs: a.recordedAtMs, what: `act_${a.kind}`, by: a.byActor, serial: null },
			detail: { act: a.id, at: a.atMs, args: a.args, why: a.why, outcome: a.outcome }
		})),
		...closures
			.filter((c) => c.endFinding !== null && c.toMs < beforeMs)
			.map((c) => ({
				...{ atMs: c.liftedAtMs ?? c.toMs, what: 'closure_end', by: null, serial: null },
				detail: { finding: c.endFinding, reason: c.reason }
			})),
		...requests.flatMap((r) => [
			{
				...{
					atMs: r.askedAtMs,
					what: 'request',
					by: r.askedBy === null ? 'rule' : `person:${r.askedBy}`,
					serial: null
				},
				detail: { reason: r.reason }
			},
			...(r.endedAtMs === null ||
			stops.some(({ stop, requestId }) => requestId === r.id && stop.recordedAtMs === r.endedAtMs)
				? []
				: [
						{
							...{
								atMs: r.endedAtMs,
								what: 'request_end',
								by: r.endedBy === null ? null : `person:${r.endedBy}`,
								serial: null
							},
							detail: { outcome: r.outcome }
						}
					])
		]),
		...stops.map(({ stop }) => ({
			...{ atMs: stop.endedAtMs ?? 0, what: 'visit', serial: null },
			by: stop.endedBy === null ? null : `person:${stop.endedBy}`,
			detail: { visit: stop.visitId, outcome: stop.outcome, note: stop.note }
		}))
	].filter((row) => row.atMs < beforeMs);
}

async function nodeRows(
	db: Db,
	serials: ReadonlyMap<number, string>,
	beforeMs: number,
	limit: number
): Promise<TimelineRow[]> {
	const ids = [...serials.keys()];
	const [references, pulses, boots, commands] = await Promise.all([
		db
			.select()
			.from(reference)
			.where(and(inArray(reference.nodeId, ids), lt(reference.learnedAtMs, beforeMs)))
			.orderBy(desc(reference.learnedAtMs))
			.limit(limit),
		db
			.select()
			.from(pulse)
			.where(and(inArray(pulse.nodeId, ids), lt(pulse.atMs, beforeMs)))
			.orderBy(desc(pulse.atMs))
			.limit(limit),
		db
			.select()
			.from(boot)
			.where(and(inArray(boot.nodeId, ids), lt(boot.atMs, beforeMs)))
			.orderBy(desc(boot.atMs))
			.limit(limit),
		db
			.select()
			.from(command)
			.where(and(inArray(command.nodeId, ids), lt(command.createdAtMs, beforeMs)))
			.orderBy(desc(command.createdAtMs))
			.limit(limit)
	]);
	const serial = (id: number) => serials.get(id) ?? null;
	return [
		...references.map((r) => ({
			...{ atMs: r.learnedAtMs, what: 'reference', by: r.acceptedBy, serial: serial(r.nodeId) },
			detail: {
				sigmaMg: r.sigmaMg,
				readings: r.readings,
				accepted: r.acceptedAtMs !== null,
				provisional: r.provisional,
				tempC: r.tempC
			}
		})),
		...pulses.map((p) => ({
			...{ atMs: p.atMs, what: `pulse_${p.source}`, by: null, serial: serial(p.nodeId) },
			detail: { accepted: p.accepted, refusal: p.refusal }
		})),
		...boots.map((b) => ({
			...{ atMs: b.atMs, what: 'boot', by: null, serial: serial(b.nodeId) },
			detail: { cause: b.cause, firmware: b.firmware, boot: b.boot }
		})),
		...commands.map((c) => ({
			...{
				atMs: c.createdAtMs,
				what: `command_${c.verb}`,
				by: c.byActor,
				serial: serial(c.nodeId)
			},
			detail: { cause: c.cause, outcome: c.outcome, reason: c.reason, answeredAt: c.answeredAtMs }
		}))
	];
}
