import { createHash } from 'node:crypto';
import { hash } from '@node-rs/argon2';
import { eq } from 'drizzle-orm';
import type { Database } from '$lib/server/store/connect';
import * as t from '$lib/server/store/schema';
import type { Role } from '$lib/schemas/roles';
import { mqttPassword } from '$lib/wire/frames';
import { seedStory } from './seed-rows';

/** Every seeded person signs in with this. */
export const SEED_PASSWORD = 'nine quiet bays';
const MIN = 60_000;
const HOUR = 60 * MIN;

export interface Seeded {
	nowMs: number;
	sites: { yard: number; shed: number };
	/** Bay ids of the yard by code. */
	bays: Record<string, number>;
	/** Bay ids of the shed by code. */
	shedBays: Record<string, number>;
	/** Node ids by serial. */
	nodes: Record<string, number>;
	/** Person ids; `elsewhere` is an operator who has only the shed. */
	people: Record<Role | 'elsewhere', number>;
	emails: Record<Role | 'elsewhere', string>;
	/** The newest change id of the yard. */
	lastChange: number;
}

/** About 5 m by 2.5 m, in rows running east: a ring closed and counter-clockwise (RFC 7946, 3.1.6). */
export function bayPolygon(latDeg: number, lonDeg: number, column: number, row: number) {
	const mLat = 1 / 111_320;
	const mLon = mLat / Math.cos((latDeg * Math.PI) / 180);
	const at = (eastM: number, northM: number): [number, number] => [
		Number((lonDeg + eastM * mLon).toFixed(7)),
		Number((latDeg + northM * mLat).toFixed(7))
	];
	const [e, n] = [column * 2.5, row * 11];
	const first = at(e, n);
	return {
		type: 'Polygon' as const,
		coordinates: [[first, at(e + 2.5, n), at(e + 2.5, n + 5), at(e, n + 5), first]]
	};
}

interface SeedState {
	state: 'vacant' | 'occupied' | 'unknown';
	sinceMin: number;
	confidence20?: number;
	condition?: (typeof t.CONDITIONS)[number];
	also?: string;
	doubt?: string;
}

/** States that are worth looking at; every other bay of the yard alternates taken and free. */
const SPECIAL: Record<string, SeedState> = {
	'A-03': { state: 'occupied', sinceMin: 900, condition: 'drifting', confidence20: 15 },
	'A-05': { state: 'unknown', sinceMin: 40, condition: 'silent' },
	'A-07': {
		state: 'occupied',
		sinceMin: 3000,
		condition: 'inverted',
		also: 'refresh_due',
		confidence20: 14
	},
	'A-09': { state: 'occupied', sinceMin: 77, doubt: 'slow_crossing', confidence20: 11 },
	'B-02': {
		state: 'vacant',
		sinceMin: 15,
		condition: 'refresh_due',
		also: 'low_cell',
		confidence20: 16
	},
	'B-04': { state: 'unknown', sinceMin: 5, condition: 'clipped' },
	'C-01': { state: 'unknown', sinceMin: 5000, condition: 'learning' }
};

async function insertId(
	query: Promise<[{ insertId: number }, unknown]> | PromiseLike<unknown>
): Promise<number> {
	const [header] = (await query) as [{ insertId: number }];
	return header.insertId;
}

async function seedPeople(db: Database, yard: number, shed: number, nowMs: number) {
	const passwordHash = await hash(SEED_PASSWORD);
	const rows = [
		['operator', 'Ona Perro', 'operator', [yard]],
		['maintenance', 'Mads Tense', 'maintenance', [yard]],
		['integrator', 'Inga Grate', 'integrator', [yard]],
		['admin', 'Ada Minster', 'admin', 'all'],
		['elsewhere', 'Elsa Ware', 'operator', [shed]]
	] as const;
	const people = {} as Seeded['people'];
	const emails = {} as Seeded['emails'];
	for (const [key, name, role, sites] of rows) {
		emails[key] = `${key}@lodekeep.example`;
		people[key] = await insertId(
			db.insert(t.person).values({
				email: emails[key],
				name,
				initials: name.replace(/[^A-Z]/g, ''),
				role,
				allSites: sites === 'all',
				passwordHash,
				createdAtMs: nowMs
			})
		);
		if (sites !== 'all') {
			await db
				.insert(t.personSite)
				.values(sites.map((siteId) => ({ personId: people[key], siteId })));
		}
	}
	return { people, emails };
}

/** A test key that depends on the serial alone, so that a test can sign as the node. */
export const seedNodeKey = (serial: string): Buffer =>
	createHash('sha256').update(`seed ${serial}`).digest();

async function seedNode(
	db: Database,
	serial: string,
	siteId: number,
	bayId: number | null,
	nowMs: number
) {
	const password = mqttPassword(seedNodeKey(serial));
	return await insertId(
		db.insert(t.node).values({
			serial,
			siteId,
			bayId,
			profileCode: 'amr-18-16384',
			mqttHash: createHash('sha256').update(password).digest(),
			unsignedAllowed: true,
			firmware: 'seed 1.0',
			createdAtMs: nowMs - 30 * 24 * HOUR,
			placedAtMs: bayId === null ? null : nowMs - 30 * 24 * HOUR
		})
	);
}

const EVIDENCE = JSON.stringify({
	because: ['the field stands 212 mG from the quiet field', 'still for 3 s'],
	against: []
});

type EventRow = typeof t.event.$inferInsert;

/** One earlier stay and the entry into the present state, in event order, as the pipeline would say. */
function eventsOf(siteId: number, bayId: number, s: SeedState, nowMs: number) {
	const sinceMs = nowMs - s.sinceMin * MIN;
	const entry = (
		type: 'arrival' | 'departure' | 'unknown',
		state: SeedState['state'],
		atMs: number
	): Omit<EventRow, 'id'> => ({
		siteId,
		bayId,
		type,
		state,
		atMs,
		recordedAtMs: atMs + 3_000,
		confidence20: state === 'unknown' ? null : (s.confidence20 ?? 19),
		uncertaintyS: 2,
		evidence: EVIDENCE
	});
	const last = { occupied: 'arrival', vacant: 'departure', unknown: 'unknown' } as const;
	return [
		entry('arrival', 'occupied', sinceMs - 9 * HOUR),
		...(s.state === 'occupied' ? [entry('departure', 'vacant', sinceMs - 2 * HOUR)] : []),
		entry(last[s.state], s.state, sinceMs)
	];
}

async function writeFeed(
	db: Database,
	siteId: number,
	firstId: number,
	rows: Omit<EventRow, 'id'>[]
) {
	const sorted = [...rows].sort((a, b) => a.recordedAtMs - b.recordedAtMs);
	const numbered = sorted.map((row, i) => ({ ...row, id: firstId + i }));
	await db.insert(t.change).values(
		numbered.map((row) => ({
			siteId,
			id: row.id,
			kind: 'event' as const,
			bayId: row.bayId,
			recordedAtMs: row.recordedAtMs
		}))
	);
	await db.insert(t.event).values(numbered);
	await db.insert(t.history).values(
		numbered.map((row) => ({
			bayId: row.bayId,
			atMs: row.atMs,
			type: row.type as 'arrival',
			state: row.state,
			confidence20: row.confidence20 ?? null,
			uncertaintyS: row.uncertaintyS,
			evidence: EVIDENCE,
			decidedAtMs: row.recordedAtMs,
			eventId: row.id
		}))
	);
	return firstId + numbered.length - 1;
}

/** Readings that tell the bay's story, and the state that detection holds after them. */
async function seedReadings(
	db: Database,
	nodeId: number,
	taken: boolean,
	sinceMs: number,
	nowMs: number
) {
	const story = seedStory(nodeId, taken, sinceMs, nowMs);
	const common = { nodeId, boot: 1, row: 0, polarity: 1, batteryMv: 3_590 };
	const rows = story.rows.map(({ atMs, seq, counts, tempC }) => {
		const [x, y, z] = counts;
		return { ...common, atMs, seq, x, y, z, tempDc: tempC * 10 };
	});
	await db.insert(t.reading).values(rows);
	const { atMs, ...last } = rows[rows.length - 1]!;
	const state = {
		heardAtMs: nowMs,
		heardBoot: 1,
		rowAtMs: atMs,
		lastAtMs: atMs,
		state: story.fast
	};
	await db.insert(t.nodeFast).values({ ...last, ...state });
	await db.insert(t.nodeSlow).values({ nodeId, state: story.slow });
}

async function seedYard(db: Database, siteId: number, nowMs: number) {
	const bays: Record<string, number> = {};
	const nodes: Record<string, number> = {};
	const feed: Omit<EventRow, 'id'>[] = [];
	const rows = { A: 12, B: 8, C: 4 } as const;
	for (const [row, [zone, count]] of Object.entries(rows).entries()) {
		const zoneId = await insertId(
			db.insert(t.zone).values({ siteId, code: zone, name: `Row ${zone}` })
		);
		for (let i = 1; i <= count; i++) {
			const code = `${zone}-${String(i).padStart(2, '0')}`;
			const bayId = await insertId(
				db.insert(t.bay).values({
					siteId,
					zoneId,
					code,
					geometry: JSON.stringify(bayPolygon(47.62, -8.31, i, row)),
					personal: code === 'C-04',
					createdAtMs: nowMs - 30 * 24 * HOUR
				})
			);
			bays[code] = bayId;
			const serial = `SEED-${code}`;
			const nodeId = await seedNode(db, serial, siteId, bayId, nowMs);
			nodes[serial] = nodeId;
			const s: SeedState = SPECIAL[code] ?? {
				state: i % 2 === 0 ? 'vacant' : 'occupied',
				sinceMin: 7 + i * 11
			};
			await db.insert(t.bayState).values({
				bayId,
				siteId,
				nodeId,
				state: s.state,
				sinceMs: nowMs - s.sinceMin * MIN,
				confidence20: s.state === 'unknown' ? null : (s.confidence20 ?? 19),
				doubtReason: s.doubt ?? null,
				doubtSinceMs: s.doubt === undefined ? null : nowMs - 20 * MIN,
				condition: s.condition ?? 'in_service',
				also: s.also ?? '',
				lastKnownState: s.state === 'unknown' ? 'occupied' : null,
				lastKnownAtMs: s.state === 'unknown' ? nowMs - (s.sinceMin + 20) * MIN : null,
				evidence: EVIDENCE
			});
			feed.push(...eventsOf(siteId, bayId, s, nowMs));
			const sinceMs = nowMs - s.sinceMin * MIN;
			await seedReadings(db, nodeId, s.state === 'occupied', sinceMs, nowMs);
		}
	}
	const lastChange = await writeFeed(db, siteId, 1, feed);
	return { bays, nodes, lastChange };
}

async function seedShed(db: Database, siteId: number, nowMs: number) {
	const bays: Record<string, number> = {};
	const zoneId = await insertId(db.insert(t.zone).values({ siteId, code: 'S', name: 'Shed' }));
	for (const code of ['S-1', 'S-2', 'S-3']) {
		const bayId = await insertId(
			db.insert(t.bay).values({ siteId, zoneId, code, createdAtMs: nowMs })
		);
		bays[code] = bayId;
		await db.insert(t.bayState).values({ bayId, siteId });
	}
	const nodeId = await seedNode(db, 'SEED-S-1', siteId, bays['S-1'] ?? null, nowMs);
	return { bays, nodeId };
}

/**
 * Fills a migrated database: a yard of 24 bays in three zones (drifting, silent, inverted, clipped,
 * learning, doubtful, refresh due; C-04 personal), a shed of three undrawn bays, four roles of the
 * yard and an operator of the shed only. Events, history and change log agree with the states.
 */
export async function seed(db: Database, nowMs = Date.now()): Promise<Seeded> {
	await seedProfile(db, nowMs);
	const common = { latDeg: 47.62, lonDeg: -8.31, timezone: 'Etc/GMT+1', createdAtMs: nowMs };
	const yard = await insertId(
		db.insert(t.site).values({ ...common, slug: 'tallow-yard', name: 'Tallow Yard' })
	);
	const shed = await insertId(
		db.insert(t.site).values({ ...common, slug: 'far-shed', name: 'Far Shed' })
	);
	const filled = await seedYard(db, yard, nowMs);
	await db.update(t.site).set({ lastChange: filled.lastChange }).where(eq(t.site.id, yard));
	const far = await seedShed(db, shed, nowMs);
	return {
		nowMs,
		sites: { yard, shed },
		bays: filled.bays,
		shedBays: far.bays,
		nodes: { ...filled.nodes, 'SEED-S-1': far.nodeId },
		...(await seedPeople(db, yard, shed, nowMs)),
		lastChange: filled.lastChange
	};
}

/** The migration brings the built-in profiles; a database without them gets the one used here. */
async function seedProfile(db: Database, nowMs: number): Promise<void> {
	const there = await db.select({ code: t.profile.code }).from(t.profile);
	if (there.some(({ code }) => code === 'amr-18-16384')) return;
	await db
		.insert(t.profile)
		.values({ code: 'amr-18-16384', body: '{}', builtIn: true, changedAtMs: nowMs });
}
