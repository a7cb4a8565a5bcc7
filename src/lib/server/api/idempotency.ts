import { createHash } from 'node:crypto';
import { z } from 'zod';
import * as stored from '$lib/server/store/queries/idempotency';
import { transaction, type Tx } from '$lib/server/store/transaction';
import type { Answer } from './answer';
import { isDuplicate, isRetriable } from './database-away';
import type { Instance } from './instance';
import { isProblem, problem, type Problem } from './problem';

const KEPT_MS = 24 * 3_600_000;
const FORM = /^[\x21-\x7e]{1,128}$/;

/** One write's name, given by its sender: Idempotency-Key. */
export interface Named {
	readonly actor: string;
	readonly key: string;
	readonly requestHash: Buffer;
}

/** The header's value; structured-field quotes are taken off. */
export function idempotencyKey(header: string | null): string | Problem | null {
	if (header === null) return null;
	const text = header.trim().replace(/^"(.*)"$/, '$1');
	return FORM.test(text)
		? text
		: problem(400, 'Idempotency-Key: 1 to 128 visible ASCII characters.');
}

export function requestHash(method: string, url: URL, body: Buffer): Buffer {
	return createHash('sha256')
		.update(`${method} ${url.pathname}${url.search}\n`)
		.update(body)
		.digest();
}

const answerShape = z.object({
	status: z.union([z.literal(200), z.literal(201), z.literal(202), z.literal(204)]),
	body: z.unknown(),
	headers: z.record(z.string(), z.string()),
	secret: z.boolean()
});

const aad = (n: Named): string => `${n.actor} ${n.key}`;

function sealAnswer(app: Instance, n: Named, a: Answer): Buffer {
	const { status, body, headers, secret } = a;
	const text = JSON.stringify({ status, body: body ?? null, headers, secret });
	return app.secret.seal('idempotency', aad(n), Buffer.from(text));
}

function openAnswer(app: Instance, n: Named, sealed: Buffer): Answer | Problem {
	const opened = app.secret.open('idempotency', aad(n), sealed);
	if (!opened.ok) return problem(409, 'The answer kept for this Idempotency-Key cannot be opened.');
	const a = answerShape.parse(JSON.parse(opened.bytes.toString('utf8')));
	const body = a.status === 204 ? undefined : a.body;
	return { kind: 'answer', media: 'application/json', changeId: null, ...a, body };
}

/** The answer given before to this key and body; a refusal when the body was another; null = none. */
export async function replay(
	app: Instance,
	n: Named,
	nowMs: number
): Promise<Answer | Problem | null> {
	const found = await stored.find(app.store.db, n.actor, n.key);
	if (found === null) return null;
	if (found.createdAtMs < nowMs - KEPT_MS) {
		await stored.forget(app.store.db, n.actor, n.key);
		return null;
	}
	if (!found.requestHash.equals(n.requestHash)) {
		return problem(409, 'This Idempotency-Key was used with another request.');
	}
	return found.answerSealed === null ? null : openAnswer(app, n, found.answerSealed);
}

/** Somebody else's request with the same key was first: its answer stands. */
export class AnsweredBefore extends Error {
	constructor(readonly answer: Answer | Problem) {
		super('answered before');
	}
}

const TRIES = 4;

/**
 * Runs a write in one transaction. With an Idempotency-Key the key is taken and the answer kept in
 * that same transaction: a killed server has done and remembered both or neither. A refusal rolls back.
 */
export async function write<T extends Answer | Problem>(
	app: Instance,
	named: Named | null,
	work: (tx: Tx) => Promise<T>,
	nowMs: number
): Promise<T> {
	for (let attempt = 1; ; attempt++) {
		try {
			return await transaction(
				app.store,
				async (tx) => await once(app, named, work, tx, nowMs),
				(value) => !isProblem(value)
			);
		} catch (error) {
			if (isRetriable(error) && attempt < TRIES) continue;
			if (named !== null && isDuplicate(error)) {
				const before = await replay(app, named, nowMs);
				if (before !== null) throw new AnsweredBefore(before);
			}
			throw error;
		}
	}
}

async function once<T extends Answer | Problem>(
	app: Instance,
	named: Named | null,
	work: (tx: Tx) => Promise<T>,
	tx: Tx,
	nowMs: number
): Promise<T> {
	if (named !== null) {
		const { actor, key: idemKey, requestHash } = named;
		await stored.claim(tx.db, { actor, idemKey, requestHash }, nowMs);
	}
	const value = await work(tx);
	if (named !== null && value.kind === 'answer') await keep(app, named, value, tx);
	return value;
}

/** Puts the answer as it was given in the end in the place of the first word on it. */
export async function keep(
	app: Instance,
	named: Named,
	answer: Answer,
	tx: Pick<Tx, 'db'> = app.store
): Promise<void> {
	const sealed = sealAnswer(app, named, answer);
	await stored.keep(tx.db, named.actor, named.key, answer.status, sealed);
}
