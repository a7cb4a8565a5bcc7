import { problem, type Problem } from '$lib/server/api/problem';
import { PHOTO_BYTES } from '$lib/schemas/visits';
import { VISIT_PARAMS } from './params';
import { PHOTO_PIXELS } from './photo-check';
import type { PhotoTaken } from './photos';
import type { Recorded } from './record';

type Why = Extract<PhotoTaken | Recorded, { ok: false }>['why'];

/** Ids are made by `crypto.randomUUID` (RFC 9562, 4). */
export const isUuid = (text: string): boolean =>
	/^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/.test(text);

const MB = 1_000_000;
const REFUSALS: Record<Why, { status: number; detail: string }> = {
	not_there: { status: 404, detail: 'stop: there is no such stop in this walk.' },
	not_yours: {
		status: 403,
		detail: 'by: somebody else recorded this. It waits until they sign in again.'
	},
	id_used: {
		status: 409,
		detail: 'This id is that of another recording. Record it anew, then it gets one of its own.'
	},
	no_such_check: { status: 422, detail: 'code: this check is not among those of the stop.' },
	too_many: {
		status: 422,
		detail: `A stop has at most ${VISIT_PARAMS.photosAStop} photos. Take one back first.`
	},
	too_large: {
		status: 413,
		detail: `A photo has at most ${PHOTO_BYTES / MB} MB. Take it at a lower resolution.`
	},
	too_many_pixels: {
		status: 422,
		detail: `A photo has at most ${PHOTO_PIXELS / MB} million pixels. Take it at a lower resolution.`
	},
	not_a_picture: { status: 415, detail: 'This is no JPEG, PNG or WebP picture. Send a photo.' },
	broken: { status: 422, detail: 'This picture cannot be read to its end. Take it again.' }
};

export function refusalOf(why: Why): Problem {
	const { status, detail } = REFUSALS[why];
	return problem(status, detail);
}
