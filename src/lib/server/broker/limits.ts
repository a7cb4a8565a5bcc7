import { totalmem } from 'node:os';

const MIB = 1024 * 1024;

/** Every bound of the broker in one place, with what it protects. */
export const LIMITS = {
	/** A message over 4,096 bytes is rejected and kept by the pipeline; above this the connection ends unread. */
	maxFrameBytes: 64 * 1024,
	/** CONNECT comes from anybody: name, serial, 64 hex digits and an empty will need under 300 bytes. */
	maxConnectBytes: 1024,
	/** The app's directory parts and receipts. */
	maxAppFrameBytes: 8 * MIB,
	/**
	 * A held message costs this much beside its own bytes (entry, two buffer views, the chunk it came in):
	 * measured, 200,000 messages of 111 bytes each in its own TCP segment cost 670 bytes of memory apiece.
	 */
	heldOverheadBytes: 570,
	/** All that is held, overhead included: protects the machine's memory in a long outage of the app. */
	heldCeilingBytes: Math.min(512 * MIB, Math.floor(totalmem() / 8)),
	/** One node's part of it: a node gone wild can't fill the ceiling alone. */
	nodeHeldBytes: 16 * MIB,
	/** Fewer than the 65,535 message ids of one MQTT session. */
	nodeHeldMessages: 32_768,
	/** Read ahead of a closed gate so that pings behind the held-back messages are still answered. */
	waitingBytes: 64 * 1024,
	/** The same once the ceiling is reached: ten thousand nodes must not add a second ceiling. */
	waitingBytesAtCeiling: 8 * 1024,
	/** Messages handed to the app ahead of its receipts: bounds what it holds in memory and gets again. */
	aheadMessages: 4_000,
	aheadBytes: 8 * MIB,
	/** One hand-over to the app; bounds the copy made for it. */
	batchMessages: 1_000,
	batchBytes: 512 * 1024,
	/** A node that leaves this much unread (answers, commands) is taken for dead. */
	unreadBytes: 256 * 1024,
	/** Commands queued for one node while it is away; more would be stale before it reads them. */
	offlineCommands: 64,
	connectTimeoutMs: 10_000,
	/** How long the app's directory counts as current after its last word (database down: no word comes). */
	directoryVouchMs: 15_000
} as const;

export type Limits = { -readonly [K in keyof typeof LIMITS]: number };
