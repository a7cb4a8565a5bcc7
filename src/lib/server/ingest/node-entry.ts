import type { GroupMember } from '$lib/detection/types';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import type { FastRow, Pointer } from '$lib/server/store/queries/node-state';
import type { ShownRow } from '$lib/server/store/queries/ingest';
import type { Spell } from './param-spells';
import { SkewWindow } from './skew';

/** A node as registered: read from the database, changed by routes and by acts. */
export interface NodeConfig {
	siteId: number;
	bayId: number | null;
	bayCode: string | null;
	profile: SensorProfile;
	/** Signed counts that the profile can produce. */
	range: { min: number; max: number };
	/** Present key first; null where one will not open: the secret is wrong. */
	keys: Uint8Array[] | null;
	unsignedAllowed: boolean;
	periodS: number;
	deltaMg: number;
	usualPeriodS: number;
	placedAtMs: number | null;
	withdrawnAtMs: number | null;
	/** Overrides of settings by event time; `member` has those of now. */
	spells: readonly Spell[];
	/** null while the node is on no bay. */
	member: GroupMember | null;
}

/** What a silence has told of a bay, until the node is heard again. */
export interface Silence {
	silent: boolean;
	/** The feed's `unknown` event and the history time it would have. */
	unknown: { eventId: number; atMs: number } | null;
}

/** Conditions that come from drift (method 4 to 6). */
export interface DriftHeld {
	driftingSinceMs: number | null;
	refreshSinceMs: number | null;
}

/** What the pipeline knows of a node beside detection's state; as in `node_fast`. */
export interface NodeLive {
	heardAtMs: number | null;
	heardBoot: number | null;
	/** Highest seq of that boot heard since the node was loaded; -1 = none. */
	heardSeq: number;
	/** How far detection has taken its rows. */
	pointer: Pointer | null;
	waitingFromMs: number | null;
	last: FastRow['last'];
	tempDc: number | null;
	batteryMv: number | null;
	rssiDbm: number | null;
	marks: number;
	skew: SkewWindow;
	/** Event times at which a boot counter that started anew was accepted, rising. */
	acceptedBootsMs: number[];
	/** What its bay shows, as stored; null = not read yet or no bay. */
	shown: ShownRow | null;
	silence: Silence;
	/** What drift holds of it: since when, or null. Told by server/drift. */
	drift: DriftHeld;
	/** Counters since boot, to add only what is new. */
	tx: { boot: number; frames: number; radioMs: number; pulses: number } | null;
}

export interface NodeEntry {
	readonly id: number;
	readonly serial: string;
	config: NodeConfig;
	live: NodeLive;
}

export const freshLive = (): NodeLive => ({
	heardAtMs: null,
	heardBoot: null,
	heardSeq: -1,
	pointer: null,
	waitingFromMs: null,
	last: null,
	tempDc: null,
	batteryMv: null,
	rssiDbm: null,
	marks: 0,
	skew: new SkewWindow(),
	acceptedBootsMs: [],
	shown: null,
	silence: { silent: false, unknown: null },
	drift: { driftingSinceMs: null, refreshSinceMs: null },
	tx: null
});

/** On a bay and not withdrawn: its rows move a state. */
export const inService = (entry: NodeEntry): boolean =>
	entry.config.member !== null && entry.config.withdrawnAtMs === null;
