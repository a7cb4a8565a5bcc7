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
	/** Resolves when the broker took the command; false when not connected. */
	publishDown(serial: string, bytes: Uint8Array): Promise<boolean>;
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
