import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { readDrawn } from './catcher';

/** A multipart/related mail as RFC 2387 has it: HTML that names its picture by content id. */
const EML = [
	'From: keep@lodekeep.example',
	'To: x@lodekeep.example',
	'Subject: s',
	'MIME-Version: 1.0',
	'Content-Type: multipart/related; boundary=b',
	'',
	'--b',
	'Content-Type: text/html; charset=utf-8',
	'',
	'<html><head></head><body><img src="cid:p@lodekeep"></body></html>',
	'--b',
	'Content-Type: image/png',
	'Content-Transfer-Encoding: base64',
	'Content-ID: <p@lodekeep>',
	'',
	'iVBORw0KGgo=',
	'--b--',
	''
].join('\r\n');
const ID = '1764500000000-0123456789ab';
let dir: string;

beforeAll(async () => {
	dir = await mkdtemp(join(tmpdir(), 'lodekeep-catcher-'));
	await mkdir(join(dir, 'mail'));
	await writeFile(join(dir, 'mail', `${ID}.eml`), EML);
});
afterAll(async () => {
	await rm(dir, { recursive: true, force: true });
});

test('a caught mail is drawn with its own pictures in it, links beside the sheet', async () => {
	const html = await readDrawn(dir, ID);
	expect(html).toContain('src="data:image/png;base64,iVBORw0KGgo="');
	expect(html).not.toContain('cid:');
	expect(html).toContain('<base target="_blank">');
});

test('no other file is reached by an id', async () => {
	expect(await readDrawn(dir, '../mail/x')).toBeNull();
	expect(await readDrawn(dir, '1764500000000-ffffffffffff')).toBeNull();
});
