import { deflateSync } from 'node:zlib';
import sharp from 'sharp';
import { expect, test } from 'vitest';
import { PHOTO_BYTES } from '$lib/schemas/visits';
import { checkPhoto } from './photo-check';

const WHITE = { r: 255, g: 255, b: 255 };
const plain = (width = 40, height = 30) =>
	sharp({ create: { width, height, channels: 3, background: WHITE } });

/** A picture with a camera's notes: where it was taken, by what, and that it lies on its side. */
const noted = async () =>
	await plain()
		.withExif({
			IFD0: { Make: 'Secretmaker', Artist: 'Somebody' },
			IFD3: {
				GPSLatitudeRef: 'N',
				GPSLatitude: '47/1 37/1 12/1',
				GPSLongitudeRef: 'W',
				GPSLongitude: '8/1 18/1 36/1'
			}
		})
		.withMetadata({ orientation: 6 })
		.jpeg()
		.toBuffer();

test('position, maker and every other note of the camera are gone from what is kept', async () => {
	const sent = await noted();
	// The crafted file does hold them: EXIF and its GPS directory (tag 0x8825, big- or little-endian).
	expect((await sharp(sent).metadata()).exif).toBeDefined();
	expect(sent.includes('Secretmaker')).toBe(true);
	expect(sent.includes(Buffer.from([0x25, 0x88])) || sent.includes(Buffer.from([0x88, 0x25]))).toBe(
		true
	);
	const kept = await checkPhoto(sent);
	if (!kept.ok) throw new Error(kept.reason);
	for (const bytes of [kept.full, kept.small]) {
		const head = await sharp(bytes).metadata();
		expect([head.exif, head.icc, head.xmp, head.iptc, head.orientation]).toEqual(
			Array.from({ length: 5 })
		);
		expect(bytes.includes('Exif')).toBe(false);
		expect(bytes.includes('Secretmaker')).toBe(false);
	}
});

test('a picture that lies on its side is kept upright', async () => {
	// Orientation 6 is a quarter turn (EXIF 2.3, tag 0x0112): 40 × 30 becomes 30 × 40.
	const kept = await checkPhoto(await noted());
	expect(kept).toMatchObject({ ok: true, widthPx: 30, heightPx: 40 });
});

test('what stands behind the picture is not kept: a second format in one file comes out as pixels', async () => {
	const script = '<script>alert(1)</script>';
	const archive = Buffer.concat([
		await plain().jpeg().toBuffer(),
		Buffer.from(`PK\x03\x04${script}`)
	]);
	const kept = await checkPhoto(archive);
	if (!kept.ok) throw new Error(kept.reason);
	expect(kept.full.includes('PK\x03\x04')).toBe(false);
	expect(kept.full.includes(script)).toBe(false);
	expect((await sharp(kept.full).metadata()).format).toBe('jpeg');
});

test('a drawing, a page and a text are no photos, whatever they are called', async () => {
	const svg = '<svg xmlns="http://www.w3.org/2000/svg" width="10" height="10"/>';
	for (const text of [svg, '<!doctype html><script></script>', 'GIF89a', '', '%PDF-1.7'])
		expect(await checkPhoto(Buffer.from(text))).toEqual({ ok: false, reason: 'not_a_picture' });
	const gif = await plain().gif().toBuffer();
	expect(await checkPhoto(gif)).toEqual({ ok: false, reason: 'not_a_picture' });
});

test('a file that only begins like a picture is broken', async () => {
	const head = Buffer.from([0xff, 0xd8, 0xff, 0xe0]);
	const svg = Buffer.from('<svg xmlns="http://www.w3.org/2000/svg"/>');
	expect(await checkPhoto(Buffer.concat([head, svg]))).toMatchObject({ ok: false });
	const whole = await plain(400, 300).jpeg().toBuffer();
	expect(await checkPhoto(whole.subarray(0, 400))).toEqual({ ok: false, reason: 'broken' });
});

test('a file over 12 MB is refused before it is opened', async () => {
	const large = Buffer.concat([await plain().jpeg().toBuffer(), Buffer.alloc(PHOTO_BYTES)]);
	expect(await checkPhoto(large)).toEqual({ ok: false, reason: 'too_large' });
});

/** A PNG of that size in few bytes (W3C PNG, 11.2: IHDR, IDAT, IEND; CRC-32 of ISO 3309). */
function bomb(widthPx: number, heightPx: number): Buffer {
	const table = Array.from({ length: 256 }, (_, n) => {
		let c = n;
		for (let k = 0; k < 8; k++) c = (c & 1) === 1 ? 0xedb88320 ^ (c >>> 1) : c >>> 1;
		return c >>> 0;
	});
	const crc = (bytes: Buffer) =>
		bytes.reduce((c, byte) => (table[(c ^ byte) & 255] ?? 0) ^ (c >>> 8), 0xffffffff) ^ 0xffffffff;
	const chunk = (type: string, data: Buffer) => {
		const body = Buffer.concat([Buffer.from(type), data]);
		const [length, sum] = [Buffer.alloc(4), Buffer.alloc(4)];
		length.writeUInt32BE(data.length);
		sum.writeUInt32BE(crc(body) >>> 0);
		return Buffer.concat([length, body, sum]);
	};
	const ihdr = Buffer.alloc(13);
	ihdr.writeUInt32BE(widthPx, 0);
	ihdr.writeUInt32BE(heightPx, 4);
	ihdr.set([1, 0, 0, 0, 0], 8);
	const line = Math.ceil(widthPx / 8) + 1;
	return Buffer.concat([
		Buffer.from([137, 80, 78, 71, 13, 10, 26, 10]),
		chunk('IHDR', ihdr),
		chunk('IDAT', deflateSync(Buffer.alloc(line * heightPx))),
		chunk('IEND', Buffer.alloc(0))
	]);
}

test('few bytes that unpack to many pixels are refused by their head', async () => {
	const packed = bomb(12_000, 12_000);
	expect(packed.length).toBeLessThan(40_000);
	expect(await checkPhoto(packed)).toEqual({ ok: false, reason: 'too_many_pixels' });
});

test('a large photo is made small enough to send: 2,048 px and 320 px at the most', async () => {
	const kept = await checkPhoto(await plain(3_000, 1_000).jpeg().toBuffer());
	if (!kept.ok) throw new Error(kept.reason);
	expect([kept.widthPx, kept.heightPx]).toEqual([2_048, 683]);
	expect((await sharp(kept.small).metadata()).width).toBe(320);
});
