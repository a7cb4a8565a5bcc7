import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';

/*
 * Contrast as WCAG 2.2 defines it (relative luminance of sRGB, 'contrast ratio' (L1 + 0.05) / (L2 + 0.05));
 * anchors: black on white 21:1 and #767676 on white 4.54:1 [M], both widely published.
 */
const css = readFileSync('src/app.css', 'utf8');

function luminance(hex: string): number {
	const channel = (at: number) => {
		const c = parseInt(hex.slice(at, at + 2), 16) / 255;
		return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
	};
	return 0.2126 * channel(1) + 0.7152 * channel(3) + 0.0722 * channel(5);
}
function contrast(a: string, b: string): number {
	const [light, dark] = [luminance(a), luminance(b)].sort((p, q) => q - p) as [number, number];
	return (light + 0.05) / (dark + 0.05);
}
function tokensAfter(selector: string): Record<string, string> {
	const start = css.indexOf(selector);
	const block = css.slice(css.indexOf('{', start), css.indexOf('}', start));
	return Object.fromEntries(
		[...block.matchAll(/--([a-z0-9-]+):\s*(#[0-9a-f]{6})/g)].map((m) => [m[1], m[2]])
	) as Record<string, string>;
}

const themes = {
	paper: tokensAfter(':root {'),
	blueprint: tokensAfter(":root[data-theme='blueprint'] {")
};

test('the contrast formula gives the published anchors', () => {
	expect(contrast('#000000', '#ffffff')).toBeCloseTo(21, 5);
	expect(contrast('#767676', '#ffffff')).toBeCloseTo(4.54, 2);
});
test('the theme by system and the theme by hand are the same blueprint', () => {
	expect(tokensAfter(":root:not([data-theme='paper']) {")).toEqual(themes.blueprint);
});
test('paper, blueprint and the accents are the colours of the brief', () => {
	expect([themes.paper.paper, themes.paper.accent]).toEqual(['#faf6ec', '#a85a00']);
	expect([themes.blueprint.paper, themes.blueprint.accent]).toEqual(['#0e2a4a', '#e0a030']);
});

describe.each(Object.entries(themes))('%s', (_name, t) => {
	test.each([
		['ink', 'paper', 7],
		['ink-2', 'paper', 4.5],
		['accent', 'paper', 4.5],
		['ink', 'wash', 7],
		['ink-2', 'wash', 4.5],
		['hatch', 'paper', 3]
	] as const)('%s on %s has at least %f : 1', (fore, back, least) => {
		expect(contrast(t[fore]!, t[back]!)).toBeGreaterThanOrEqual(least);
	});
	test('hatching stays under 4.2 : 1, so that a full site does not glare', () => {
		expect(contrast(t.hatch!, t.paper!)).toBeLessThanOrEqual(4.2);
	});
});
