import { deflateSync } from 'node:zlib';

/** An 8-bit palette picture: one byte a pixel, its colour by index. */
export interface Raster {
	width: number;
	height: number;
	pixels: Uint8Array;
	/** [r, g, b] by index. */
	palette: readonly (readonly [number, number, number])[];
}

const SIGNATURE = Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]);
const PALETTE_COLOUR = 3;

const CRC_TABLE = Uint32Array.from({ length: 256 }, (_, n) => {
	let c = n;
	for (let k = 0; k < 8; k += 1) c = (c & 1) === 1 ? 0xedb88320 ^ (c >>> 1) : c >>> 1;
	return c >>> 0;
});

/** CRC-32 of ISO 3309, as PNG asks (PNG specification, annex D). */
export function crc32(bytes: Uint8Array): number {
	let c = 0xffffffff;
	for (const byte of bytes) c = (CRC_TABLE[(c ^ byte) & 0xff] ?? 0) ^ (c >>> 8);
	return (c ^ 0xffffffff) >>> 0;
}

function chunk(type: string, data: Uint8Array): Buffer {
	const body = Buffer.concat([Buffer.from(type, 'latin1'), data]);
	const out = Buffer.alloc(body.length + 8);
	out.writeUInt32BE(data.length, 0);
	body.copy(out, 4);
	out.writeUInt32BE(crc32(body), body.length + 4);
	return out;
}

/** PNG (ISO/IEC 15948), 8-bit palette, no filter, no interlace. */
export function encodePng({ width, height, pixels, palette }: Raster): Buffer {
	const header = Buffer.alloc(13);
	header.writeUInt32BE(width, 0);
	header.writeUInt32BE(height, 4);
	header.set([8, PALETTE_COLOUR, 0, 0, 0], 8);
	const lines = Buffer.alloc(height * (width + 1));
	for (let y = 0; y < height; y += 1)
		lines.set(pixels.subarray(y * width, (y + 1) * width), y * (width + 1) + 1);
	return Buffer.concat([
		SIGNATURE,
		chunk('IHDR', header),
		chunk('PLTE', Uint8Array.from(palette.flat())),
		chunk('IDAT', deflateSync(lines, { level: 9 })),
		chunk('IEND', new Uint8Array())
	]);
}
