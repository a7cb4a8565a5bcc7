import sharp from 'sharp';
import { PHOTO_BYTES } from '$lib/schemas/visits';

/** Pixels of the largest picture that is opened; a phone's has 12 to 50 million. */
export const PHOTO_PIXELS = 50_000_000;
/** Longer side of what is kept, px: bay codes and cracks can be read at it. */
const KEPT_PX = 2_048;
const SMALL_PX = 320;
const QUALITY = 80;
/** A picture that takes longer is made to take long. */
const DECODE_S = 15;

// One picture at a time and no memory of earlier ones: the app has other things to do.
sharp.concurrency(1);
sharp.cache(false);

export type PhotoRefusal = 'too_large' | 'not_a_picture' | 'too_many_pixels' | 'broken';
export type PhotoChecked =
	| { ok: true; full: Buffer; small: Buffer; widthPx: number; heightPx: number }
	| { ok: false; reason: PhotoRefusal };

const SIGNATURES: readonly { format: string; is: (b: Buffer) => boolean }[] = [
	// JPEG: SOI and the first marker (ITU-T T.81, B.1.1.3).
	{ format: 'jpeg', is: (b) => b.subarray(0, 3).equals(Buffer.from([0xff, 0xd8, 0xff])) },
	// PNG signature (W3C PNG, 5.2).
	{
		format: 'png',
		is: (b) => b.subarray(0, 8).equals(Buffer.from([137, 80, 78, 71, 13, 10, 26, 10]))
	},
	// RIFF container with the form WEBP (RFC 9649, 2.4).
	{
		format: 'webp',
		is: (b) => b.toString('latin1', 0, 4) === 'RIFF' && b.toString('latin1', 8, 12) === 'WEBP'
	}
];

/**
 * Decides by content alone whether bytes are a photo, and draws it anew: what is kept holds pixels and
 * nothing else, no EXIF, no position, no second format behind the picture. Nothing of the name or type that
 * the sender gave is looked at.
 */
export async function checkPhoto(bytes: Buffer): Promise<PhotoChecked> {
	if (bytes.length > PHOTO_BYTES) return { ok: false, reason: 'too_large' };
	const claimed = SIGNATURES.find(({ is }) => is(bytes))?.format;
	if (claimed === undefined) return { ok: false, reason: 'not_a_picture' };
	try {
		// The pixels are counted from the head of the file, before anything is unpacked.
		const head = await sharp(bytes, { limitInputPixels: false }).metadata();
		if (head.format !== claimed || (head.pages ?? 1) > 1)
			return { ok: false, reason: 'not_a_picture' };
		if (head.width * head.height > PHOTO_PIXELS) return { ok: false, reason: 'too_many_pixels' };
		return { ok: true, ...(await redraw(bytes)) };
	} catch {
		return { ok: false, reason: 'broken' };
	}
}

async function redraw(bytes: Buffer) {
	const { data: full, info } = await sharp(bytes, {
		limitInputPixels: PHOTO_PIXELS,
		failOn: 'error'
	})
		.timeout({ seconds: DECODE_S })
		// Turned as the camera said; the note that said so is dropped with all others.
		.rotate()
		.resize({ width: KEPT_PX, height: KEPT_PX, fit: 'inside', withoutEnlargement: true })
		.flatten({ background: '#ffffff' })
		.jpeg({ quality: QUALITY })
		.toBuffer({ resolveWithObject: true });
	const small = await sharp(full)
		.resize({ width: SMALL_PX, height: SMALL_PX, fit: 'inside', withoutEnlargement: true })
		.jpeg({ quality: QUALITY })
		.toBuffer();
	return { full, small, widthPx: info.width, heightPx: info.height };
}
