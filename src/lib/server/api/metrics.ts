import { Counter, Gauge, Histogram, Registry, collectDefaultMetrics } from 'prom-client';
import type { PipelineStatus } from '$lib/server/ingest/pipeline-status';
import { instance } from './instance';

const KEY = Symbol.for('lodekeep.metrics');

interface Metrics {
	registry: Registry;
	requests: Counter<'route' | 'method' | 'status'>;
	duration: Histogram<'route'>;
}

type Kept = typeof globalThis & { [KEY]?: Metrics };

/** One registry a process, over reloads in dev. */
export function metrics(): Metrics {
	const kept = globalThis as Kept;
	kept[KEY] ??= create();
	return kept[KEY];
}

function create(): Metrics {
	const registry = new Registry();
	collectDefaultMetrics({ register: registry, prefix: 'lodekeep_' });
	for (const [figure, help] of Object.entries(INGEST)) ingestGauge(registry, figure, help);
	return {
		registry,
		requests: new Counter({
			name: 'lodekeep_http_requests_total',
			help: 'Answers by route, method and status.',
			labelNames: ['route', 'method', 'status'],
			registers: [registry]
		}),
		duration: new Histogram({
			name: 'lodekeep_http_request_seconds',
			help: 'Time from request to answer.',
			labelNames: ['route'],
			buckets: [0.001, 0.002, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 1, 2.5],
			registers: [registry]
		})
	};
}

type Figure = {
	[K in keyof PipelineStatus]: PipelineStatus[K] extends number ? K : never;
}[keyof PipelineStatus];

/** Figures of the pipeline that runs here; absent in a copy that waits. */
const INGEST = {
	messages: 'Messages stored since this pipeline began.',
	readings: 'Readings stored since this pipeline began.',
	rejected: 'Messages rejected since this pipeline began.',
	events: 'Events told since this pipeline began.',
	batches: 'Batches committed since this pipeline began.',
	retries: 'Batches tried again since this pipeline began.',
	pending: 'Messages taken and not yet acknowledged.',
	delayS: 'Seconds from arrival to commit of the last batch.'
} as const satisfies Partial<Record<Figure, string>>;

function ingestGauge(registry: Registry, figure: string, help: string): void {
	const name = figure.replace(/[A-Z]/g, (letter) => `_${letter.toLowerCase()}`);
	new Gauge({
		name: `lodekeep_ingest_${name}`,
		help,
		registers: [registry],
		collect() {
			const status = instance().ingest().pipeline;
			if (status !== null) this.set(status[figure as Figure]);
		}
	});
}

const METHODS = new Set(['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS']);

/** Routes by their pattern, never by path: labels stay few and hold no names. */
export function observe(
	event: { route: { id: string | null }; request: { method: string } },
	status: number,
	durationMs: number
): void {
	const route = event.route.id ?? 'none';
	const method = METHODS.has(event.request.method) ? event.request.method : 'other';
	metrics().requests.inc({ route, method, status: String(status) });
	metrics().duration.observe({ route }, durationMs / 1000);
}
