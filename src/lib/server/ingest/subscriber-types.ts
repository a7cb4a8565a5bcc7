import type { BrokerStats } from '$lib/server/broker/counters';

/** One message as the broker held it, waiting for its receipt. */
export interface HeldMessage {
	/** Position in the broker's order; opaque to the pipeline. */
	readonly receipt: number;
	readonly serial: string;
	readonly topic: string;
	readonly bytes: Uint8Array;
	readonly arrivedAtMs: number;
	/** QoS 0 is taken without promise and counted. */
	readonly promised: boolean;
}

/**
 * What the pipeline sees of MQTT, the same for the embedded broker and an external one (MQTT_URL).
 * `take` resolves with 1..max messages in order of arrival, or [] when closed.
 */
export interface Subscriber {
	take(max: number): Promise<HeldMessage[]>;
	/** Committed (or rejected and kept): the broker may now write the PUBACKs. */
	settle(messages: readonly HeldMessage[]): void;
	/** Resolves true when the broker took the command; false when not connected or lost on the way. */
	publishDown(serial: string, bytes: Uint8Array): Promise<boolean>;
	/**
	 * The whole list of nodes that may sign in; kept and told again after every reconnect. Nodes that are
	 * not in it lose their connection. True when the broker has it. External broker: nothing to do, true.
	 */
	replaceDirectory(entries: readonly NodeDirectoryEntry[]): Promise<boolean>;
	/**
	 * Changes since: new and re-keyed nodes, withdrawn serials. Call it at least every 10 s while the
	 * database answers, with empty lists too: each call vouches for the directory for 15 s. Without that an
	 * unknown serial is told to come again (return code 3) instead of being refused (5).
	 */
	updateDirectory(
		entries: readonly NodeDirectoryEntry[],
		removed: readonly string[]
	): Promise<boolean>;
	/** `false` at once when the database stops answering. */
	vouchDirectory(current: boolean): Promise<boolean>;
	/** The embedded broker's counters, at most about 1 s old; null while not connected or with an external broker. */
	stats(): BrokerStats | null;
	/**
	 * From where nodes signed in, serial → network, that was told since the last call; handed over once. Empty with
	 * an external broker, which keeps that to itself.
	 */
	takeNetworks(): Map<string, string>;
	readonly connected: boolean;
	onConnected(listener: (connected: boolean) => void): void;
	/** Forgets what was taken and not settled: it comes again, in order. */
	reset(): Promise<void>;
	close(): Promise<void>;
}

/** What the app tells the broker of nodes (over its own authenticated link). */
export interface NodeDirectoryEntry {
	serial: string;
	/** SHA-256 of the MQTT password, hex; one or (during a key overlap) two. */
	hashes: string[];
}
