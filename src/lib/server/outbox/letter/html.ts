import { PLOT } from './drift-plot';
import type { Letter } from './letter';

/** Ink on paper, as on screen (app.css); mail readers take only inline styles and tables. */
const PAPER = '#FAF6EC';
const INK = '#211C16';
const INK_2 = '#5B5247';
const HAIR = '#B8AE9C';
const FONT = "font-family:'JetBrains Mono',ui-monospace,Menlo,Consolas,monospace";
const BODY = `${FONT};font-size:14px;line-height:21px;color:${INK}`;
const SMALL = `${FONT};font-size:12px;line-height:18px;color:${INK_2}`;

/** static/mark/mail-header.png holds twice as many pixels. */
const MARK = { width: 220, height: 48 };

const ESCAPES: Record<string, string> = {
	'&': '&amp;',
	'<': '&lt;',
	'>': '&gt;',
	'"': '&quot;',
	"'": '&#39;'
};
const safe = (text: string): string => text.replace(/[&<>"']/g, (c) => ESCAPES[c] ?? c);

const link = (href: string, text: string, style = ''): string =>
	`<a href="${safe(href)}" style="color:${INK};text-decoration:underline;${style}">${safe(text)}</a>`;
const cell = (inside: string, style: string): string =>
	`<td style="${style};vertical-align:top">${inside}</td>`;
const table = (rows: string, style = ''): string =>
	`<table role="presentation" cellpadding="0" cellspacing="0" border="0" width="100%" style="border-collapse:collapse;${style}">${rows}</table>`;

/** A drawing sheet of 600 px: frame, heading, list, plot, actions, title block. */
export function drawHtml(letter: Letter): string {
	const inside = [
		`<h1 style="${FONT};font-size:18px;line-height:26px;font-weight:600;color:${INK};margin:0 0 12px">${safe(letter.heading)}</h1>`,
		letter.news === null ? '' : `<p style="${BODY};margin:0 0 14px">${safe(letter.news)}</p>`,
		letter.lines.length === 0 ? '' : lines(letter),
		letter.groups.map(group).join(''),
		letter.more === null ? '' : `<p style="${BODY};margin:10px 0 0">${safe(letter.more)}</p>`,
		letter.plot === null ? '' : plot(letter.plot),
		actions(letter)
	].join('\n');
	return `<!doctype html>
<html lang="${letter.lang}"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width">
<meta name="color-scheme" content="light"><title>${safe(letter.subject)}</title></head>
<body style="margin:0;padding:0;background:${PAPER}">
<table role="presentation" cellpadding="0" cellspacing="0" border="0" width="100%" style="background:${PAPER}"><tr><td align="center" style="padding:16px 8px">
<table role="presentation" cellpadding="0" cellspacing="0" border="0" width="600" style="width:100%;max-width:600px;border:2px solid ${INK};border-collapse:collapse">
<tr><td style="padding:14px 24px 0">${head(letter)}</td></tr>
<tr><td style="padding:12px 24px 20px">
${inside}
</td></tr>
<tr><td style="border-top:2px solid ${INK}">${block(letter)}</td></tr>
</table>
<table role="presentation" cellpadding="0" cellspacing="0" border="0" width="600" style="width:100%;max-width:600px"><tr><td style="padding:10px 2px;${SMALL}">${foot(letter)}</td></tr></table>
</td></tr></table>
</body></html>
`;
}

/** Our mark in its own hand, shown at half its size; in letters where pictures are not shown. */
const head = ({ markCid }: Letter): string =>
	markCid === null
		? `<span style="${BODY};font-weight:600">Lodekeep</span>`
		: `<img src="cid:${safe(markCid)}" width="${MARK.width}" height="${MARK.height}" alt="Lodekeep" style="display:block;border:0;${BODY};font-weight:600">`;

const lines = ({ lines: all }: Letter): string =>
	table(
		all
			.map(({ label, value, href }) => {
				const edge = `padding:5px 0;border-top:1px solid ${HAIR}`;
				const inside = href === undefined ? safe(value) : link(href, value);
				return `<tr>${cell(safe(label), `${SMALL};${edge};padding-right:14px;white-space:nowrap`)}${cell(inside, `${BODY};${edge}`)}</tr>`;
			})
			.join('\n')
	);

const group = ({ title, next, rows }: Letter['groups'][number]): string =>
	`<h2 style="${FONT};font-size:14px;line-height:21px;font-weight:600;color:${INK};margin:14px 0 4px">${safe(title)}: ${safe(next)}</h2>` +
	table(
		rows
			.map(
				(row) =>
					`<tr>${row.map((text, i) => cell(safe(text), `${i === 0 ? `${BODY};font-weight:600` : SMALL};padding:4px 12px 4px 0;border-top:1px solid ${HAIR}`)).join('')}</tr>`
			)
			.join('\n')
	);

const plot = ({ cid, alt }: NonNullable<Letter['plot']>): string =>
	`<p style="margin:16px 0 0"><img src="cid:${safe(cid)}" width="${PLOT.shownWidth}" height="${PLOT.shownHeight}" alt="${safe(alt)}" style="display:block;width:100%;max-width:${PLOT.shownWidth}px;height:auto;border:0"></p>
<p style="${SMALL};margin:2px 0 0">${safe(alt)}</p>`;

/** 44 px high for a thumb. */
const actions = ({ actions: all }: Letter): string =>
	table(
		`<tr><td style="padding:18px 0 0">${all
			.map(({ text, href, main }) =>
				link(
					href,
					text,
					`${BODY};display:inline-block;padding:11px 16px;margin:0 10px 10px 0;border:${main ? `2px solid ${INK};font-weight:600` : `1px solid ${INK_2}`};text-decoration:none`
				)
			)
			.join('')}</td></tr>`
	);

const block = ({ block: all }: Letter): string =>
	table(
		`<tr>${all
			.map(({ label, value }, i) =>
				cell(
					`<span style="${SMALL}">${safe(label)}</span><br>${safe(value)}`,
					`${BODY};padding:8px 12px;font-size:12px;${i === 0 ? '' : `border-left:1px solid ${INK_2}`}`
				)
			)
			.join('')}</tr>`
	);

const foot = ({ foot: all }: Letter): string =>
	all
		.map(({ text, href }) => (href === undefined ? safe(text) : link(href, text, `color:${INK_2}`)))
		.join(' &nbsp;·&nbsp; ');
