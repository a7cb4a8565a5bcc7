import { readFile } from 'node:fs/promises';
import { openBrowser } from '../support/browser';

/**
 * Draws the PNGs of static/mark from its SVGs, for what takes no SVG (installed icons, mail). Run by hand
 * after an edit of the SVGs: npx tsx tests/bench/web-mark.ts
 */
const FONT = 'node_modules/@fontsource/jetbrains-mono/files/jetbrains-mono-latin-600-normal.woff2';
const PAPER = '#faf6ec';

/** Name, source, width and height in px. */
const DRAWN = [
	['icon-192', 'icon', 192, 192],
	['icon-512', 'icon', 512, 512],
	['apple-touch-icon', 'icon', 180, 180],
	['mail-header', 'wordmark', 440, 96]
] as const;

const font = (await readFile(FONT)).toString('base64');
const browser = await openBrowser();
for (const [name, source, width, height] of DRAWN) {
	const page = await browser.newPage({ viewport: { width, height } });
	const svg = await readFile(`static/mark/${source}.svg`, 'utf8');
	await page.setContent(
		`<style>@font-face{font-family:'JetBrains Mono';font-weight:600;src:url(data:font/woff2;base64,${font})}
		body{margin:0;background:${PAPER}}svg{display:block;width:${width}px;height:${height}px}</style>${svg}`
	);
	await page.evaluate(async () => await document.fonts.ready);
	await page.screenshot({ path: `static/mark/${name}.png` });
	await page.close();
}
await browser.close();
