import { promisify } from 'node:util';
import { brotliCompress, constants, gzip } from 'node:zlib';
import type { Coding } from './negotiate';

const gzipAsync = promisify(gzip);
const brotliAsync = promisify(brotliCompress);

/** Below this a coded answer saves no packet. */
export const MIN_CODED_BYTES = 1_000;
/** Protects the heap: coded answers are kept at most up to this many bytes, oldest out first. */
const KEPT_BYTES = 32 * 1024 * 1024;

export async function compress(bytes: Buffer, coding: Coding): Promise<Buffer> {
	if (coding === 'gzip') return await gzipAsync(bytes, { level: 6 });
	if (coding === 'br') {
		return await brotliAsync(bytes, {
			params: {
				[constants.BROTLI_PARAM_QUALITY]: 4,
				[constants.BROTLI_PARAM_SIZE_HINT]: bytes.length
			}
		});
	}
	return bytes;
}

/** Coded answers by URL and ETag: many readers of one unchanged site share one compression. */
export class CodedCache {
	readonly #kept = new Map<string, Buffer>();
	#bytes = 0;

	constructor(private readonly limitBytes = KEPT_BYTES) {}

	get(key: string): Buffer | undefined {
		const bytes = this.#kept.get(key);
		if (bytes !== undefined) {
			this.#kept.delete(key);
			this.#kept.set(key, bytes);
		}
		return bytes;
	}

	set(key: string, bytes: Buffer): void {
		if (bytes.length > this.limitBytes / 4) return;
		this.#bytes += bytes.length - (this.#kept.get(key)?.length ?? 0);
		this.#kept.delete(key);
		this.#kept.set(key, bytes);
		for (const [oldest, value] of this.#kept) {
			if (this.#bytes <= this.limitBytes) break;
			this.#kept.delete(oldest);
			this.#bytes -= value.length;
		}
	}

	get bytes(): number {
		return this.#bytes;
	}
}
