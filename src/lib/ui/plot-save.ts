/** Head and rows of what a plot shows; null is a gap. */
export interface PlotTable {
	head: readonly string[];
	rows: readonly (readonly (string | number | null)[])[];
}

/** A field of CSV after RFC 4180; text that a spreadsheet would take for a formula is set in an apostrophe. */
function field(value: string | number | null): string {
	if (value === null) return '';
	if (typeof value === 'number') return String(Math.round(value * 100) / 100);
	const safe = /^[=+\-@\t]/.test(value) ? `'${value}` : value;
	return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** CSV after RFC 4180: CRLF, a head line, numbers with a point and at most two decimals. */
export const asCsv = ({ head, rows }: PlotTable): string =>
	[head, ...rows].map((row) => `${row.map(field).join(',')}\r\n`).join('');

/** 'Unexplained x of B07' → 'unexplained-x-of-b07'. */
export function fileStem(title: string): string {
	const stem = title
		.normalize('NFKD')
		.toLowerCase()
		.replace(/[^a-z0-9]+/g, '-')
		.replace(/^-|-$/g, '');
	return stem === '' ? 'plot' : stem;
}

export function saveFile(name: string, type: string, content: string | Blob): void {
	const link = document.createElement('a');
	link.href = URL.createObjectURL(
		content instanceof Blob ? content : new Blob([content], { type: `${type};charset=utf-8` })
	);
	link.download = name;
	link.click();
	// After the click has been taken: some browsers read the address later.
	setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
}

/** The plot as it stands, on its paper, with title above and zone and span beneath. */
export function savePicture(
	canvas: HTMLCanvasElement,
	said: { title: string; footnote: string },
	themed: Element
): void {
	const ratio = devicePixelRatio;
	const [margin, line] = [12 * ratio, 22 * ratio];
	const sheet = document.createElement('canvas');
	sheet.width = canvas.width + 2 * margin;
	sheet.height = canvas.height + 2 * margin + 2 * line;
	const pen = sheet.getContext('2d');
	if (pen === null) return;
	const style = getComputedStyle(themed);
	pen.fillStyle = style.getPropertyValue('--paper').trim();
	pen.fillRect(0, 0, sheet.width, sheet.height);
	pen.fillStyle = style.getPropertyValue('--ink').trim();
	pen.font = `600 ${13 * ratio}px 'JetBrains Mono', monospace`;
	pen.fillText(said.title, margin, margin + line * 0.6);
	pen.drawImage(canvas, margin, margin + line);
	pen.font = `${11 * ratio}px 'JetBrains Mono', monospace`;
	pen.fillText(said.footnote, margin, sheet.height - margin);
	sheet.toBlob((blob) => {
		if (blob !== null) saveFile(`${fileStem(said.title)}.png`, 'image/png', blob);
	}, 'image/png');
}
