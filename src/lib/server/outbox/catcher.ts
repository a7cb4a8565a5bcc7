import { readFile, readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { simpleParser, type AddressObject } from 'mailparser';

/** One caught mail, without its body. */
export interface CaughtMail {
	id: string;
	caughtAtMs: number;
	from: string;
	to: string;
	subject: string;
}

export interface CaughtMailBody extends CaughtMail {
	text: string;
	html: string | null;
	headers: { name: string; value: string }[];
}

/** The file's name without '.eml'; nothing else reaches the file system. */
const ID = /^(\d{13})-[0-9a-f]{12}$/;

const dirOf = (dataDir: string) => join(dataDir, 'mail');

/** The newest first. Empty when no catcher ever ran here. */
export async function list(dataDir: string, limit = 100): Promise<CaughtMail[]> {
	const names = await readdir(dirOf(dataDir)).catch(() => []);
	const ids = names
		.filter((name) => name.endsWith('.eml'))
		.map((name) => name.slice(0, -'.eml'.length))
		.filter((id) => ID.test(id))
		.sort()
		.reverse()
		.slice(0, limit);
	const mails = await Promise.all(ids.map(async (id) => await read(dataDir, id)));
	return mails
		.filter((mail) => mail !== null)
		.map(({ id, caughtAtMs, from, to, subject }) => ({ id, caughtAtMs, from, to, subject }));
}

/** One mail, or null when there is none of that id. */
export async function read(dataDir: string, id: string): Promise<CaughtMailBody | null> {
	const caughtAt = ID.exec(id)?.[1];
	const bytes = await bytesOf(dataDir, id);
	if (caughtAt === undefined || bytes === null) return null;
	const mail = await simpleParser(bytes, { skipImageLinks: true });
	return {
		id,
		caughtAtMs: Number(caughtAt),
		from: addresses(mail.from),
		to: addresses(mail.to),
		subject: mail.subject ?? '',
		text: mail.text ?? '',
		html: mail.html === false ? null : (mail.html ?? null),
		headers: mail.headerLines.map(({ key, line }) => ({
			name: key,
			value: line.slice(line.indexOf(':') + 1).trim()
		}))
	};
}

async function bytesOf(dataDir: string, id: string): Promise<Buffer | null> {
	if (!ID.test(id)) return null;
	return await readFile(join(dirOf(dataDir), `${id}.eml`)).catch(() => null);
}

/** The drawn part with its own pictures in it; links open beside the sheet. Null when there is none. */
export async function readDrawn(dataDir: string, id: string): Promise<string | null> {
	const bytes = await bytesOf(dataDir, id);
	if (bytes === null) return null;
	const { html } = await simpleParser(bytes);
	return html === false || html === undefined
		? null
		: html.replace('<head>', '<head><base target="_blank">');
}

function addresses(value: AddressObject | AddressObject[] | undefined): string {
	if (value === undefined) return '';
	return [value]
		.flat()
		.map(({ text }) => text)
		.join(', ');
}
