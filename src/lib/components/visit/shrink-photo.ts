const LONGEST_PX = 2_048;
const QUALITY = 0.85;

/**
 * A photo as it is kept: upright, at most 2,048 px, JPEG. Drawn anew here already, so that it is short on the
 * way and its position never leaves the phone. What this browser cannot draw goes as it is; the server checks.
 */
export async function shrinkPhoto(file: Blob): Promise<ArrayBuffer> {
	try {
		const picture = await createImageBitmap(file, { imageOrientation: 'from-image' });
		const scale = Math.min(1, LONGEST_PX / Math.max(picture.width, picture.height));
		const paper = document.createElement('canvas');
		paper.width = Math.round(picture.width * scale);
		paper.height = Math.round(picture.height * scale);
		paper.getContext('2d')?.drawImage(picture, 0, 0, paper.width, paper.height);
		picture.close();
		const small = await new Promise<Blob | null>((done) =>
			paper.toBlob(done, 'image/jpeg', QUALITY)
		);
		return await (small ?? file).arrayBuffer();
	} catch {
		return await file.arrayBuffer();
	}
}
