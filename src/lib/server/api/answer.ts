import type { Media } from './negotiate';

/** What a handler gives back when it does not refuse. */
export interface Answer {
	readonly kind: 'answer';
	readonly status: 200 | 201 | 202 | 204;
	/** undefined = no content. */
	readonly body: unknown;
	readonly media: Media;
	readonly headers: Readonly<Record<string, string>>;
	/** The change id that the body is of, for routes stamped by it. */
	readonly changeId: number | null;
	/** Holds something that is shown once: never kept by any cache. */
	readonly secret: boolean;
}

type Extra = Partial<Pick<Answer, 'media' | 'headers' | 'changeId' | 'secret'>>;

const answer = (status: Answer['status'], body: unknown, extra: Extra = {}): Answer => ({
	kind: 'answer',
	status,
	body,
	media: extra.media ?? 'application/json',
	headers: extra.headers ?? {},
	changeId: extra.changeId ?? null,
	secret: extra.secret ?? false
});

/** Bytes of a type of their own, kept by no cache. */
export const file = (bytes: Buffer, contentType: string): Answer =>
	answer(200, bytes, { headers: { 'content-type': contentType } });

export const ok = (body: unknown, extra?: Extra): Answer => answer(200, body, extra);
export const noContent = (): Answer => answer(204, undefined);
/** Done in part: the pipeline has not taken it yet. */
export const accepted = (body: unknown): Answer => answer(202, body);

export const created = (body: unknown, location: string | null, extra: Extra = {}): Answer =>
	answer(201, body, {
		...extra,
		headers: { ...extra.headers, ...(location === null ? {} : { location }) }
	});
