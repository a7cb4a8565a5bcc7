import { Counter, Histogram, Registry, collectDefaultMetrics } from 'prom-client';

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
