import { openDB, type DBSchema, type IDBPDatabase } from 'idb';

/**
 * What was recorded and is not sent yet, in this browser's IndexedDB. Each lies sealed under a key of the
 * person who recorded it (AES-256-GCM, W3C Web Cryptography); in clear stand only whose it is, when it was
 * made and how it fares. It outlives sign-out, an expired session and another person's sign-in.
 */
export type WaitingState = 'waiting' | 'held' | 'refused' | 'unreadable';

export interface WaitingRow {
	/** UUID: under this id the server takes it once. */
	id: string;
	personId: number;
	madeAtMs: number;
	state: WaitingState;
	/** What the server said, or ''. */
	why: string;
	iv: Uint8Array<ArrayBuffer>;
	sealed: ArrayBuffer;
}

/** The sealed part: what it is and where it belongs, and a photo's bytes behind it. */
export interface WaitingBody {
	site: string;
	visit: number;
	stop: number;
	bay: string;
	kind: 'tick' | 'part' | 'note' | 'outcome' | 'photo';
	code: string;
	amount: number;
	text: string;
}

interface Schema extends DBSchema {
	recording: { key: string; value: WaitingRow; indexes: { person: number } };
}

const NAME = 'lodekeep-waiting';
let opened: Promise<IDBPDatabase<Schema>> | null = null;

const database = (): Promise<IDBPDatabase<Schema>> => {
	opened ??= openDB<Schema>(NAME, 1, {
		upgrade: (db) => {
			db.createObjectStore('recording', { keyPath: 'id' }).createIndex('person', 'personId');
		}
	});
	return opened;
};

/** Sealing needs a secure page (https, or loopback). */
export const canWait = (): boolean =>
	typeof indexedDB !== 'undefined' && globalThis.isSecureContext && 'subtle' in crypto;

export async function importKeys(base64: readonly string[]): Promise<CryptoKey[]> {
	return await Promise.all(
		base64.map(async (text) => {
			const bytes = Uint8Array.from(atob(text), (c) => c.charCodeAt(0));
			return await crypto.subtle.importKey('raw', bytes, 'AES-GCM', false, ['encrypt', 'decrypt']);
		})
	);
}

const HEAD_BYTES = 4;
const aad = (id: string, personId: number) => new TextEncoder().encode(`${id} ${personId}`);

/** Length of the JSON head, the head, the photo. */
function packed(body: WaitingBody, photo: ArrayBuffer | null): Uint8Array<ArrayBuffer> {
	const head = new TextEncoder().encode(JSON.stringify(body));
	const bytes = new Uint8Array(HEAD_BYTES + head.length + (photo?.byteLength ?? 0));
	new DataView(bytes.buffer).setUint32(0, head.length);
	bytes.set(head, HEAD_BYTES);
	if (photo !== null) bytes.set(new Uint8Array(photo), HEAD_BYTES + head.length);
	return bytes;
}

export async function put(
	key: CryptoKey,
	row: { id: string; personId: number; madeAtMs: number },
	body: WaitingBody,
	photo: ArrayBuffer | null
): Promise<void> {
	const iv = crypto.getRandomValues(new Uint8Array(12));
	const algorithm = { name: 'AES-GCM', iv, additionalData: aad(row.id, row.personId) };
	const sealed = await crypto.subtle.encrypt(algorithm, key, packed(body, photo));
	await (await database()).put('recording', { ...row, state: 'waiting', why: '', iv, sealed });
}

export interface OpenedRow {
	body: WaitingBody;
	photo: Blob | null;
}

/** Tries each key; null when none of them sealed it. */
export async function open(row: WaitingRow, keys: readonly CryptoKey[]): Promise<OpenedRow | null> {
	for (const key of keys) {
		const bytes = await crypto.subtle
			.decrypt(
				{ name: 'AES-GCM', iv: row.iv, additionalData: aad(row.id, row.personId) },
				key,
				row.sealed
			)
			.catch(() => null);
		if (bytes === null) continue;
		const length = new DataView(bytes).getUint32(0);
		const head = new TextDecoder().decode(bytes.slice(HEAD_BYTES, HEAD_BYTES + length));
		const body = JSON.parse(head) as WaitingBody;
		const rest = bytes.slice(HEAD_BYTES + length);
		return { body, photo: body.kind === 'photo' ? new Blob([rest]) : null };
	}
	return null;
}

/** A person's own, in the order in which they were made. */
export async function ofPerson(personId: number): Promise<WaitingRow[]> {
	const rows = await (await database()).getAllFromIndex('recording', 'person', personId);
	return rows.sort((a, b) =>
		a.madeAtMs === b.madeAtMs ? a.id.localeCompare(b.id) : a.madeAtMs - b.madeAtMs
	);
}

/** How many lie here of everybody else. */
export async function countOfOthers(personId: number): Promise<number> {
	const db = await database();
	return (await db.count('recording')) - (await db.countFromIndex('recording', 'person', personId));
}

export async function mark(id: string, state: WaitingState, why: string): Promise<void> {
	const tx = (await database()).transaction('recording', 'readwrite');
	const row = await tx.store.get(id);
	if (row !== undefined) await tx.store.put({ ...row, state, why });
	await tx.done;
}

export async function drop(id: string): Promise<void> {
	await (await database()).delete('recording', id);
}
