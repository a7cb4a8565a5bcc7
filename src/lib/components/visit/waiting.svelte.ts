import { ask } from '$lib/components/live/ask';
import { sendOne } from './waiting-send';
import * as store from './waiting-store';

/** One recording that is not sent yet, opened where its person is here. */
export interface Waiting extends Omit<store.WaitingRow, 'iv' | 'sealed' | 'state'> {
	state: store.WaitingState | 'sending';
	body: store.WaitingBody | null;
	/** A photo to look at before it is sent. */
	url: string | null;
}

const TRY_EVERY_MS = 10_000;

/**
 * What one person recorded in this browser and is not sent yet. There is one a page; it sends what it can,
 * one after another in the order made, and tells the page when the server has taken something.
 */
export class WaitingList {
	items = $state.raw<Waiting[]>([]);
	others = $state(0);
	/** Taken as additions since the page was opened. */
	added = $state(0);
	#base64: string[] = [];
	#keys = $state.raw<CryptoKey[]>([]);
	#sending = false;
	#timer: ReturnType<typeof setInterval> | null = null;
	#urls: Record<string, string> = {};
	#heard: (() => Promise<void>)[] = [];

	constructor(readonly personId: number) {}

	/** Calls when the server has taken something: the sheet is to be read again. The answer ends it. */
	whenTaken(call: () => Promise<void>): () => void {
		this.#heard = [...this.#heard, call];
		return () => {
			this.#heard = this.#heard.filter((one) => one !== call);
		};
	}

	/** Keys as kept, or the server's; without either what lies here stays sealed until it answers. */
	async start(kept: readonly string[] | null): Promise<string[]> {
		if (!store.canWait()) return [];
		this.#timer ??= setInterval(() => void this.send(), TRY_EVERY_MS);
		await this.#unlock(kept);
		await this.#read();
		void this.send();
		return this.#base64;
	}

	async #unlock(kept: readonly string[] | null): Promise<void> {
		if (this.#keys.length > 0) return;
		this.#base64 = kept === null ? await this.#askKeys() : [...kept];
		this.#keys = await store.importKeys(this.#base64);
	}

	stop(): void {
		if (this.#timer !== null) clearInterval(this.#timer);
		this.#timer = null;
		for (const url of Object.values(this.#urls)) URL.revokeObjectURL(url);
		this.#urls = {};
	}

	get ready(): boolean {
		return this.#keys.length > 0;
	}

	/** Keeps first, then sends: what is recorded is safe before anything can go wrong on the way. */
	async add(body: store.WaitingBody, photo: ArrayBuffer | null = null): Promise<void> {
		const [key] = this.#keys;
		if (key === undefined) throw new Error('no key');
		const row = { id: crypto.randomUUID(), personId: this.personId, madeAtMs: Date.now() };
		await store.put(key, row, body, photo);
		await this.#read();
		void this.send();
	}

	async again(id: string): Promise<void> {
		await store.mark(id, 'waiting', '');
		await this.#read();
		await this.send();
	}

	async discard(id: string): Promise<void> {
		await store.drop(id);
		await this.#read();
	}

	/** Sends what waits; one that is refused is left and does not hold up the others. */
	async send(): Promise<void> {
		if (this.#sending) return;
		this.#sending = true;
		let taken = 0;
		try {
			if ((await store.ofPerson(this.personId)).length > 0) await this.#unlock(null);
			if (this.#keys.length === 0) return;
			for (const row of await store.ofPerson(this.personId)) {
				if (row.state === 'refused' || row.state === 'unreadable') continue;
				const went = await this.#sendRow(row);
				if (went === 'stop') break;
				if (went === 'taken') taken++;
			}
		} finally {
			this.#sending = false;
		}
		await this.#read();
		if (taken > 0) for (const call of this.#heard) await call().catch(() => undefined);
	}

	async #sendRow(row: store.WaitingRow): Promise<'taken' | 'left' | 'stop'> {
		const opened = await store.open(row, this.#keys);
		if (opened === null) {
			await store.mark(row.id, 'unreadable', '');
			return 'left';
		}
		this.items = this.items.map((i) => (i.id === row.id ? { ...i, state: 'sending' } : i));
		const sent = await sendOne(row, opened);
		switch (sent.how) {
			case 'taken':
			case 'added':
				if (sent.how === 'added') this.added++;
				await store.drop(row.id);
				return 'taken';
			case 'held':
				await store.mark(row.id, 'held', sent.why);
				return 'stop';
			case 'refused':
				await store.mark(row.id, 'refused', sent.why);
				return 'left';
			case 'later':
				await store.mark(row.id, 'waiting', '');
				return 'stop';
		}
	}

	async #read(): Promise<void> {
		const rows = await store.ofPerson(this.personId);
		const items: Waiting[] = [];
		for (const row of rows) {
			const opened = await store.open(row, this.#keys);
			const { id, personId, madeAtMs, state, why } = row;
			const url = opened?.photo == null ? null : this.#urlOf(id, opened.photo);
			items.push({ id, personId, madeAtMs, state, why, body: opened?.body ?? null, url });
		}
		this.items = items;
		this.others = await store.countOfOthers(this.personId);
	}

	#urlOf(id: string, photo: Blob): string {
		return (this.#urls[id] ??= URL.createObjectURL(photo));
	}

	async #askKeys(): Promise<string[]> {
		try {
			return (await ask<{ keys: string[] }>('/api/desk/visits/key')).body.keys;
		} catch {
			return [];
		}
	}
}

let shared: WaitingList | null = null;

/** The one list of this page; in the browser only, where there is one person a page. */
export function waitingList(personId: number): WaitingList {
	if (shared?.personId !== personId) {
		shared?.stop();
		shared = new WaitingList(personId);
	}
	return shared;
}
