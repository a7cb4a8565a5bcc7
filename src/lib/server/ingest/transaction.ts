import { format } from 'mysql2';
import type { Connection } from 'mysql2/promise';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as lease from '$lib/server/store/queries/lease';

/** Another copy has taken the pipeline over: nothing more may be written here. */
export class LeaseLost extends Error {}

/** Well under the packet that MariaDB takes (16 MiB by default). */
const FLUSH_BYTES = 4_000_000;

/**
 * One transaction whose statements travel together: `later` only collects, a query with an answer takes
 * all that was collected along. What fails in the middle keeps the rest, and the COMMIT, from running.
 */
export class Transaction implements Sql {
	#texts: string[];
	#bytes = 0;
	#fenced = false;
	readonly #connection: Connection;
	readonly #holder: string;
	/** For statements whose answer nobody needs. */
	readonly later: Sql;

	constructor(connection: Connection, holder: string) {
		this.#connection = connection;
		this.#holder = holder;
		this.#texts = ['START TRANSACTION', lease.fenceSql(lease.PIPELINE_LEASE)];
		this.later = {
			query: async (text: string, values?: unknown[]) => {
				this.#add(written(text, values));
				if (this.#bytes > FLUSH_BYTES) await this.flush();
				return [NOTHING, undefined];
			}
		};
	}

	/** Sends what was collected, then this, and gives back the answer to this. */
	async query(text: string, values?: unknown[]): Promise<[unknown, unknown]> {
		this.#add(written(text, values));
		const answers = await this.#send();
		return [answers.at(-1), undefined];
	}

	async flush(): Promise<void> {
		if (this.#texts.length > 0) await this.#send();
	}

	async commit(): Promise<void> {
		this.#add('COMMIT');
		await this.#send();
	}

	#add(text: string): void {
		this.#texts.push(text);
		this.#bytes += text.length;
	}

	async #send(): Promise<unknown[]> {
		const texts = this.#texts;
		this.#texts = [];
		this.#bytes = 0;
		const [answer] = await this.#connection.query(texts.join(';'));
		const answers = texts.length === 1 ? [answer] : (answer as unknown[]);
		if (!this.#fenced) {
			this.#fenced = true;
			const rows = answers[1] as { holder: string }[];
			if (rows[0]?.holder !== this.#holder) throw new LeaseLost();
		}
		return answers;
	}
}

/** Values escaped into the text, as mysql2 does it for `query`. */
const written = (text: string, values?: unknown[]): string =>
	values === undefined ? text : format(text, values as Parameters<typeof format>[1]);

const NOTHING = { affectedRows: 0, insertId: 0 };

/** The pipeline's own connection, one transaction at a time; opened when needed, thrown away after an error. */
export class Transactions {
	#connection: Connection | null = null;
	readonly #open: () => Promise<Connection>;
	readonly #holder: string;

	constructor(open: () => Promise<Connection>, holder: string) {
		this.#open = open;
		this.#holder = holder;
	}

	/** Runs `write` under the pipeline's lease and commits. Throws on any error, having rolled back. */
	async run<T>(write: (transaction: Transaction) => Promise<T>): Promise<T> {
		const connection = (this.#connection ??= await this.#opened());
		let clean = false;
		try {
			const transaction = new Transaction(connection, this.#holder);
			const result = await write(transaction);
			await transaction.commit();
			clean = true;
			return result;
		} finally {
			// After an error nobody knows what the connection still holds: it goes, and the server rolls back.
			if (!clean) {
				this.#connection = null;
				connection.destroy();
			}
		}
	}

	/** One that dies while nobody uses it is not used again. */
	async #opened(): Promise<Connection> {
		const connection = await this.#open();
		connection.on('error', () => {
			if (this.#connection === connection) this.#connection = null;
		});
		return connection;
	}

	close(): void {
		this.#connection?.destroy();
		this.#connection = null;
	}
}
