import { createHash } from 'node:crypto';
import type { GroupMember } from '$lib/detection/types';
import { signedRange } from '$lib/magnetics/counts';
import { builtInProfile, parseProfile, type SensorProfile } from '$lib/magnetics/sensor-profile';
import type { Secret } from '$lib/server/secret';
import * as acts from '$lib/server/store/queries/acts';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as driftState from '$lib/server/store/queries/drift-state';
import * as ingest from '$lib/server/store/queries/ingest';
import * as nodeState from '$lib/server/store/queries/node-state';
import { centreOf } from './bay-centre';
import { chain, type Chains } from './chain';
import { freshLive, inService, type NodeConfig, type NodeEntry, type NodeLive } from './node-entry';
import { ParamSpells, spellAt, type Spell } from './param-spells';
import { SkewWindow } from './skew';
import type { NodeDirectoryEntry } from './subscriber-types';

const NO_CHAINS: Chains = { groups: [], neighbours: new Map() };

/** All nodes of the deployment in memory: as registered, and what the pipeline knows of each. */
export class Registry {
	readonly #secret: Secret;
	readonly #byId = new Map<number, NodeEntry>();
	readonly #bySerial = new Map<string, NodeEntry>();
	/** Opened keys by the sealed bytes, so that a re-read unseals only what changed. */
	readonly #keys = new Map<string, Uint8Array | null>();
	#spells = new ParamSpells();
	#chains: Chains = NO_CHAINS;
	#groupOf = new Map<number, readonly number[]>();
	#directory = new Map<string, NodeDirectoryEntry>();

	constructor(secret: Secret) {
		this.#secret = secret;
	}

	/** Reads everything; memory of known nodes stays as it is. */
	async loadAll(sql: Sql, nowMs: number): Promise<void> {
		await this.loadParameters(sql);
		const rows = await ingest.nodes(sql);
		const known = new Set(this.#byId.keys());
		const unknown = rows.some((row) => !known.has(row.id));
		for (const row of rows) this.#put(row, nowMs);
		this.#chainAll();
		if (unknown) await this.loadLives(sql, null, known);
	}

	/** Reads some nodes again: an act or a route changed them. Returns whether groups changed. */
	async loadSome(
		sql: Sql,
		which: { ids?: readonly number[]; serials?: readonly string[] },
		nowMs: number
	): Promise<void> {
		const rows = [
			...(await ingest.nodesById(sql, which.ids ?? [])),
			...(await ingest.nodesBySerial(sql, which.serials ?? []))
		];
		const fresh = rows.filter((row) => !this.#byId.has(row.id)).map((row) => row.id);
		for (const row of rows) this.#put(row, nowMs);
		if (rows.length > 0) this.#chainAll();
		await this.loadLives(sql, fresh);
	}

	/** Nodes take them up when they are next read. */
	async loadParameters(sql: Sql): Promise<void> {
		this.#spells = new ParamSpells(await ingest.parameters(sql));
	}

	/** Takes what is stored as what is known: after an error, and for nodes not seen before. */
	async loadLives(
		sql: Sql,
		ids: readonly number[] | null,
		except: ReadonlySet<number> = new Set()
	): Promise<void> {
		if (ids !== null && ids.length === 0) return;
		const wanted = (id: number) => !except.has(id);
		const all = ids ?? [...this.#byId.keys()];
		for (const id of all.filter(wanted)) {
			const entry = this.#byId.get(id);
			if (entry !== undefined) entry.live = freshLive();
		}
		for (const row of await ingest.lives(sql, ids))
			if (wanted(row.nodeId)) Object.assign(this.#live(row.nodeId), storedLive(row));
		for (const { nodeId, skews } of await nodeState.clocks(sql, ids))
			if (wanted(nodeId)) this.#live(nodeId).skew = SkewWindow.decode(skews);
		for (const { nodeId, atMs } of await acts.acceptedBoots(sql, ids))
			if (wanted(nodeId)) this.#live(nodeId).acceptedBootsMs.push(atMs);
		for (const { nodeId, placedAtMs, ...held } of await driftState.flags(sql, { nodeIds: ids })) {
			const entry = this.#byId.get(nodeId);
			if (entry !== undefined && wanted(nodeId) && entry.config.placedAtMs === placedAtMs)
				entry.live.drift = held;
		}
		await this.#loadShown(sql, all.filter(wanted));
	}

	/** The habit that a node said it keeps, once that is stored. */
	adoptHabit(id: number, habit: { periodS?: number; deltaMg?: number }): void {
		const entry = this.#byId.get(id);
		if (entry === undefined) return;
		const { config } = entry;
		entry.config = {
			...config,
			periodS: habit.periodS ?? config.periodS,
			deltaMg: habit.deltaMg ?? config.deltaMg
		};
	}

	byId(id: number): NodeEntry | undefined {
		return this.#byId.get(id);
	}

	bySerial(serial: string): NodeEntry | undefined {
		return this.#bySerial.get(serial);
	}

	all(): IterableIterator<NodeEntry> {
		return this.#byId.values();
	}

	/** The members of a node's group, ids rising; undefined while it is not in service. */
	groupOf(id: number): readonly number[] | undefined {
		return this.#groupOf.get(id);
	}

	neighboursOf(id: number): readonly number[] {
		return this.#chains.neighbours.get(id) ?? [];
	}

	/** What the broker should know, and what it need no longer know, since the last call. */
	directoryChanges(nowMs: number): { entries: NodeDirectoryEntry[]; removed: string[] } {
		const now = new Map<string, NodeDirectoryEntry>();
		for (const entry of this.#byId.values()) {
			const hashes = entry.config.withdrawnAtMs === null ? this.#hashes.get(entry.id) : undefined;
			if (hashes !== undefined)
				now.set(entry.serial, { serial: entry.serial, hashes: hashes(nowMs) });
		}
		const entries = [...now.values()].filter(
			({ serial, hashes }) => this.#directory.get(serial)?.hashes.join() !== hashes.join()
		);
		const removed = [...this.#directory.keys()].filter((serial) => !now.has(serial));
		this.#directory = now;
		return { entries, removed };
	}

	directory(nowMs: number): NodeDirectoryEntry[] {
		this.directoryChanges(nowMs);
		return [...this.#directory.values()];
	}

	readonly #hashes = new Map<number, (nowMs: number) => string[]>();

	#live(id: number): NodeLive {
		return this.#byId.get(id)?.live ?? freshLive();
	}

	#put(row: ingest.RegisteredNode, nowMs: number): void {
		const config = this.#configOf(row, nowMs);
		const known = this.#byId.get(row.id);
		const entry: NodeEntry = known ?? { id: row.id, serial: row.serial, config, live: freshLive() };
		entry.config = config;
		this.#byId.set(row.id, entry);
		this.#bySerial.set(row.serial, entry);
		this.#hashes.set(row.id, (atMs) => [
			row.mqttHash.toString('hex'),
			...(row.mqttHashPrev !== null && (row.keyPrevUntilMs ?? 0) > atMs
				? [row.mqttHashPrev.toString('hex')]
				: [])
		]);
	}

	#configOf(row: ingest.RegisteredNode, nowMs: number): NodeConfig {
		const profile = profileOf(row);
		const spells = this.#spells.of(row.siteId, row.id);
		return {
			siteId: row.siteId,
			bayId: row.bayId,
			bayCode: row.bayCode,
			profile,
			range: signedRange(profile),
			keys: this.#keysOf(row, nowMs),
			unsignedAllowed: row.unsignedAllowed === 1,
			periodS: row.periodS,
			deltaMg: row.deltaMg,
			usualPeriodS: row.usualPeriodS,
			placedAtMs: row.placedAtMs,
			withdrawnAtMs: row.withdrawnAtMs,
			spells,
			member: row.bayId === null ? null : this.#memberOf(row, profile, spells, nowMs)
		};
	}

	#memberOf(
		row: ingest.RegisteredNode,
		profile: SensorProfile,
		spells: readonly Spell[],
		nowMs: number
	): GroupMember {
		const centre = row.geometry === null ? null : centreOf(row.geometry, row.latDeg, row.lonDeg);
		return {
			nodeId: row.id,
			eastM: row.eastM ?? centre?.eastM ?? null,
			northM: row.northM ?? centre?.northM ?? null,
			row: row.row,
			profile: {
				rangeMg: profile.rangeMg,
				sensitivityTempcoPerC: profile.sensitivityTempcoPerC,
				filmSafeMg: profile.filmSafeMg
			},
			// The usual period, not the one in force: a replay must find what live ingest found.
			periodS: row.usualPeriodS,
			graceS: row.graceS,
			params: spellAt(spells, nowMs).params
		};
	}

	/** null when a sealed key will not open: the installation's secret is wrong. */
	#keysOf(row: ingest.RegisteredNode, nowMs: number): Uint8Array[] | null {
		const keys: Uint8Array[] = [];
		const former = (row.keyPrevUntilMs ?? 0) > nowMs ? row.keyPrevSealed : null;
		for (const sealed of [row.keySealed, former]) {
			if (sealed === null) continue;
			const key = this.#open(row.id, sealed);
			if (key === null) return null;
			keys.push(key);
		}
		return keys;
	}

	#open(nodeId: number, sealed: Buffer): Uint8Array | null {
		const name = createHash('sha256').update(`${nodeId}:`).update(sealed).digest('base64');
		const known = this.#keys.get(name);
		// A failure is not remembered for good: the operator may start again with the right secret.
		if (known !== undefined && known !== null) return known;
		const opened = this.#secret.open('node key', nodeId, sealed);
		const key = opened.ok ? new Uint8Array(opened.bytes) : null;
		this.#keys.set(name, key);
		return key;
	}

	#chainAll(): void {
		const placed = [...this.#byId.values()].filter(inService).map(({ id, config }) => ({
			id,
			siteId: config.siteId,
			eastM: config.member?.eastM ?? null,
			northM: config.member?.northM ?? null
		}));
		this.#chains = chain(placed);
		this.#groupOf = new Map(
			this.#chains.groups.flatMap((ids) => ids.map((id) => [id, ids] as const))
		);
	}

	async #loadShown(sql: Sql, ids: readonly number[]): Promise<void> {
		const byBay = new Map<number, NodeEntry>();
		for (const id of ids) {
			const entry = this.#byId.get(id);
			if (entry !== undefined && entry.config.bayId !== null && inService(entry))
				byBay.set(entry.config.bayId, entry);
		}
		for (const row of await ingest.shown(sql, [...byBay.keys()])) {
			const live = byBay.get(row.bayId)?.live;
			if (live === undefined) continue;
			live.shown = row;
			if (row.condition !== 'silent') continue;
			const unknown = row.state === 'unknown' ? await ingest.lastUnknown(sql, row.bayId) : null;
			live.silence = {
				silent: true,
				unknown: unknown === null ? null : { eventId: unknown.id, atMs: unknown.atMs }
			};
		}
	}
}

/** A stored profile that does not parse was written past the forms: the built-in of its name stands in. */
function profileOf(row: ingest.RegisteredNode): SensorProfile {
	const parsed = parseProfile(jsonOf(row.profileBody));
	if (parsed.ok) return parsed.profile;
	const builtIn = builtInProfile(row.profileCode);
	if (builtIn === null) throw new Error(`Sensor profile ${row.profileCode} cannot be read.`);
	return builtIn;
}

function jsonOf(text: string): unknown {
	try {
		return JSON.parse(text);
	} catch {
		return null;
	}
}

function storedLive(row: ingest.StoredLive): Partial<NodeLive> {
	const { lastAtMs, x, y, z, polarity } = row;
	return {
		// 0 stands for a node that was placed before it was ever heard.
		heardAtMs: row.heardAtMs === 0 ? null : row.heardAtMs,
		heardBoot: row.heardBoot,
		pointer: nodeState.toPointer(row.rowAtMs, row.boot, row.seq, row.row),
		waitingFromMs: row.waitingFromMs,
		last:
			lastAtMs === null || x === null || y === null || z === null
				? null
				: { atMs: lastAtMs, x, y, z, polarity: polarity ?? 1 },
		tempDc: row.tempDc,
		batteryMv: row.batteryMv,
		rssiDbm: row.rssiDbm,
		marks: row.marks
	};
}
