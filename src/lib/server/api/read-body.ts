import { problem, type Problem } from './problem';

/** Enough for 1,000 nodes; bays with outlines may be larger. */
export const BODY_BYTES = 1_000_000;
export const GEOJSON_BODY_BYTES = 10_000_000;

export type BodyRead =
	{ ok: true; value: unknown; bytes: Buffer } | { ok: false; problem: Problem };

const refuse = (p: Problem): BodyRead => ({ ok: false, problem: p });

/** Reads a JSON body: its type, its size, its UTF-8 and its syntax are checked here, its form later. */
export async function readBody(
	request: Request,
	o: { geojson: boolean; optional: boolean }
): Promise<BodyRead> {
	const limit = o.geojson ? GEOJSON_BODY_BYTES : BODY_BYTES;
	const tooLarge = problem(413, `A body here has at most ${limit} bytes.`);
	if (Number(request.headers.get('content-length') ?? 0) > limit) return refuse(tooLarge);
	const empty = isEmpty(request);
	if (empty && o.optional) return { ok: true, value: {}, bytes: Buffer.alloc(0) };
	const types = ['application/json', ...(o.geojson ? ['application/geo+json'] : [])];
	const type = request.headers.get('content-type')?.split(';')[0]?.trim().toLowerCase() ?? '';
	if (!empty && !types.includes(type)) {
		return refuse(
			problem(415, `Send ${types.join(' or ')}.`, { headers: { accept: types.join(', ') } })
		);
	}
	const coding = request.headers.get('content-encoding') ?? 'identity';
	if (coding !== 'identity') {
		return refuse(
			problem(415, 'Send the body without a content coding.', {
				headers: { 'accept-encoding': 'identity' }
			})
		);
	}
	const bytes = empty ? Buffer.alloc(0) : await readBytes(request, limit);
	if (bytes === null) return refuse(tooLarge);
	if (bytes.length === 0) {
		if (o.optional) return { ok: true, value: {}, bytes };
		return refuse(problem(400, 'This request needs a body.'));
	}
	try {
		const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
		return { ok: true, value: JSON.parse(text) as unknown, bytes };
	} catch {
		return refuse(problem(400, 'The body is not JSON in UTF-8.'));
	}
}

/** Kit drops a body that names no type: its length still tells that there was one. */
function isEmpty({ body, headers }: Request): boolean {
	if (body !== null) return false;
	return Number(headers.get('content-length') ?? 0) === 0 && !headers.has('transfer-encoding');
}

/** null when it is longer than `limit`, or longer than the server as a whole reads. */
export async function readBytes(request: Request, limit: number): Promise<Buffer | null> {
	const chunks: Uint8Array[] = [];
	let length = 0;
	const reader = request.body?.getReader();
	if (reader === undefined) return Buffer.alloc(0);
	try {
		for (;;) {
			const { done, value } = await reader.read();
			if (done) return Buffer.concat(chunks);
			length += value.length;
			if (length > limit) return null;
			chunks.push(value);
		}
	} catch (error) {
		if (error instanceof Error && 'status' in error && error.status === 413) return null;
		throw error;
	} finally {
		reader.releaseLock();
	}
}
