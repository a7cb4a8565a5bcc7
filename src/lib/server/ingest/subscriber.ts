import { startEmbedded, type EmbeddedConfig } from './subscriber-embedded';
import { startExternal, type ExternalConfig } from './subscriber-external';
import type { Subscriber } from './subscriber-types';

export type SubscriberConfig = EmbeddedConfig | ExternalConfig;

/**
 * Starts taking messages: from the embedded broker over its own link, or with `MQTT_URL` from any broker
 * (there a PUBACK to a node is that broker's own promise). Returns at once; connects, and connects again, by itself.
 */
export const startSubscriber = (config: SubscriberConfig): Subscriber =>
	config.kind === 'embedded' ? startEmbedded(config) : startExternal(config);
