import { request, type IncomingHttpHeaders } from 'node:http';

export interface Answer {
	status: number;
	headers: IncomingHttpHeaders;
	bytes: Buffer;
	text: string;
	/** The parsed body; throws when it is not JSON. */
	json(): Record<string, unknown>;
	/** name=value pairs of Set-Cookie. */
	cookies: Record<string, string>;
}

export interface Wanted {
	method?: string;
	headers?: Record<string, string>;
	/** An object is sent as JSON, text and bytes as they are. */
	body?: unknown;
}

/** One request as it goes over the wire: nothing is added, nothing is followed, nothing is unpacked. */
export async function http(url: string, wanted: Wanted = {}): Promise<Answer> {
	const { body } = wanted;
	const isRaw = typeof body === 'string' || body instanceof Uint8Array;
	const bytes =
		body === undefined ? null : isRaw ? Buffer.from(body) : Buffer.from(JSON.stringify(body));
	const headers: Record<string, string> = {
		...(bytes === null ? {} : { 'content-length': String(bytes.length) }),
		...(body === undefined || isRaw ? {} : { 'content-type': 'application/json' }),
		...wanted.headers
	};
	return await new Promise((resolve, reject) => {
		const sent = request(url, { method: wanted.method ?? 'GET', headers, agent: false }, (res) => {
			const chunks: Buffer[] = [];
			res.on('data', (chunk: Buffer) => chunks.push(chunk));
			res.on('error', reject);
			res.on('end', () => {
				resolve(answerOf(res.statusCode ?? 0, res.headers, Buffer.concat(chunks)));
			});
		});
		sent.on('error', reject);
		sent.end(bytes ?? undefined);
	});
}

function answerOf(status: number, headers: IncomingHttpHeaders, bytes: Buffer): Answer {
	const text = bytes.toString('utf8');
	const cookies = Object.fromEntries(
		(headers['set-cookie'] ?? []).map((line) => {
			const pair = line.split(';')[0] ?? '';
			return [pair.slice(0, pair.indexOf('=')), pair.slice(pair.indexOf('=') + 1)];
		})
	);
	const json = () => JSON.parse(text) as Record<string, unknown>;
	return { status, headers, bytes, text, json, cookies };
}
