import type { Sql } from '$lib/server/store/queries/bulk';
import * as commands from '$lib/server/store/queries/commands';
import { stormNodeIds } from '$lib/server/store/queries/notices';
import { sealCommand } from '$lib/wire/frames';
import { downTopic } from '$lib/wire/topics';
import type { Registry } from './registry';
import type { Subscriber } from './subscriber-types';

/** An unanswered command is sent again, as the same id, after these pauses; the last one repeats. */
const AGAIN_AFTER_MS = [10_000, 30_000, 60_000, 300_000];

/** Sends open commands to their nodes, signed, until they are answered or expire. */
export class CommandSender {
	readonly #registry: Registry;
	readonly #subscriber: Subscriber;
	/** When each open command was last handed to the broker, and how often. */
	readonly #sent = new Map<string, { atMs: number; times: number }>();

	constructor(registry: Registry, subscriber: Subscriber) {
		this.#registry = registry;
		this.#subscriber = subscriber;
	}

	/** Returns how many went out. */
	async send(sql: Sql, nowMs: number): Promise<number> {
		const open = await commands.open(sql, nowMs);
		this.#forgetClosed(open);
		const stormy = await this.#stormy(sql, open);
		let sent = 0;
		for (const command of open)
			if (!stormy.has(command.nodeId) && (await this.#sendOne(sql, command, nowMs))) sent += 1;
		return sent;
	}

	/** Of many that fell silent together nobody hears: what is meant for them waits until they do. */
	async #stormy(sql: Sql, open: readonly commands.CommandRow[]): Promise<Set<number>> {
		const siteIds = open.flatMap(({ nodeId }) => this.#registry.byId(nodeId)?.config.siteId ?? []);
		return await stormNodeIds(sql, [...new Set(siteIds)]);
	}

	async #sendOne(sql: Sql, command: commands.CommandRow, nowMs: number): Promise<boolean> {
		const entry = this.#registry.byId(command.nodeId);
		const key = entry?.config.keys?.[0];
		if (entry === undefined || key === undefined) return false;
		// A node that started anew obeys nothing meant for the boot before (protocol, 'down').
		const { heardBoot } = entry.live;
		if (heardBoot !== null && command.boot !== heardBoot) {
			await this.#meantForEarlier(sql, command, heardBoot, nowMs);
			return false;
		}
		const name = command.id.toString('hex');
		const last = this.#sent.get(name) ?? { atMs: 0, times: 0 };
		const pauseMs = AGAIN_AFTER_MS[Math.min(last.times, AGAIN_AFTER_MS.length) - 1] ?? 0;
		if (nowMs - last.atMs < pauseMs) return false;
		const bytes = sealCommand(downTopic(entry.serial), frameOf(command, nowMs), key);
		if (!(await this.#subscriber.publishDown(entry.serial, bytes))) return false;
		this.#sent.set(name, { atMs: nowMs, times: last.times + 1 });
		await commands.noteSent(sql, command.id, nowMs);
		return true;
	}

	/** Ingest's own wishes are ordered anew for the present boot; others' commands end as failed. */
	async #meantForEarlier(
		sql: Sql,
		command: commands.CommandRow,
		boot: number,
		nowMs: number
	): Promise<void> {
		await commands.answer(sql, command.id, command.nodeId, {
			atMs: nowMs,
			outcome: 2,
			reason: commands.STARTED_ANEW
		});
		if (command.byActor !== 'rule' || command.cause.startsWith('refresh')) return;
		const { nodeId, verb, periodS, deltaMg, cause, byActor, expiresAtMs } = command;
		const report = periodS === null || deltaMg === null ? null : { periodS, deltaMg };
		await commands.order(sql, {
			nodeId,
			verb,
			report,
			boot,
			cause,
			byActor,
			createdAtMs: nowMs,
			expiresAtMs
		});
	}

	#forgetClosed(open: readonly commands.CommandRow[]): void {
		const names = new Set(open.map(({ id }) => id.toString('hex')));
		for (const name of this.#sent.keys()) if (!names.has(name)) this.#sent.delete(name);
	}
}

const frameOf = (command: commands.CommandRow, nowMs: number) => ({
	id: new Uint8Array(command.id),
	verb: command.verb,
	boot: command.boot,
	t: nowMs,
	expiresMs: command.expiresAtMs,
	report:
		command.periodS === null || command.deltaMg === null
			? null
			: { periodS: command.periodS, deltaMg: command.deltaMg }
});
