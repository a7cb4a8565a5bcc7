/** Why the broker refused something; a closed list, so that each can be a label of one metric. */
export const REFUSALS = [
	'level',
	'identifier',
	'credentials',
	'unavailable',
	'withdrawn',
	'link',
	'will',
	'topic',
	'subscription',
	'qos2',
	'too_large',
	'malformed'
] as const;
export type BrokerRefusal = (typeof REFUSALS)[number];

/** What the app is told of the broker once a second, for /metrics and /readyz. */
export interface BrokerStats {
	connectedNodes: number;
	knownNodes: number;
	heldMessages: number;
	heldBytes: number;
	/** Connections not read on just now: rate, one node's part, or the ceiling. */
	gatedConnections: number;
	atCeiling: boolean;
	takenTotal: number;
	answeredTotal: number;
	/** Sent again after a reconnect while still held: not held twice. */
	adoptedTotal: number;
	qos0Total: number;
	retainIgnoredTotal: number;
	/** Times a node was slowed to MQTT_RATE. */
	slowedTotal: number;
	keepaliveCutTotal: number;
	commandsDroppedTotal: number;
	refusedTotal: Record<BrokerRefusal, number>;
}

export type Totals = Omit<
	BrokerStats,
	'connectedNodes' | 'knownNodes' | 'heldMessages' | 'heldBytes' | 'gatedConnections' | 'atCeiling'
>;

export const newTotals = (): Totals => ({
	takenTotal: 0,
	answeredTotal: 0,
	adoptedTotal: 0,
	qos0Total: 0,
	retainIgnoredTotal: 0,
	slowedTotal: 0,
	keepaliveCutTotal: 0,
	commandsDroppedTotal: 0,
	refusedTotal: Object.fromEntries(REFUSALS.map((reason) => [reason, 0])) as Record<
		BrokerRefusal,
		number
	>
});
