/** Content negotiation as RFC 9110, 12.5: the few media types and codings there are here. */
export type Coding = 'identity' | 'gzip' | 'br';
export type Media = 'application/json' | 'application/geo+json';

interface Weighted {
	name: string;
	q: number;
}

function weighted(header: string): Weighted[] {
	return header
		.split(',')
		.map((part) => {
			const [name = '', ...params] = part
				.trim()
				.toLowerCase()
				.split(/\s*;\s*/);
			const q = params.find((p) => p.startsWith('q='))?.slice(2);
			const parsed = q === undefined ? 1 : Number(q);
			return { name, q: Number.isFinite(parsed) ? Math.min(1, Math.max(0, parsed)) : 0 };
		})
		.filter(({ name }) => name !== '');
}

const qOf = (list: Weighted[], name: string): number | null =>
	list.find((w) => w.name === name)?.q ?? null;

/** Brotli before gzip at equal weight; nothing said, nothing coded. */
export function codingFor(acceptEncoding: string | null): Coding {
	const list = weighted(acceptEncoding ?? '');
	const any = qOf(list, '*') ?? 0;
	const br = qOf(list, 'br') ?? any;
	const gzip = qOf(list, 'gzip') ?? qOf(list, 'x-gzip') ?? any;
	const identity = qOf(list, 'identity') ?? 0.001;
	const best = Math.max(br, gzip);
	if (best === 0 || best < identity) return 'identity';
	return br >= gzip ? 'br' : 'gzip';
}

/** GeoJSON only where it is named and not weighted below JSON. */
export function mediaFor(accept: string | null): Media {
	const list = weighted(accept ?? '');
	const geo = qOf(list, 'application/geo+json') ?? 0;
	const json = qOf(list, 'application/json') ?? 0;
	return geo > 0 && geo >= json ? 'application/geo+json' : 'application/json';
}
