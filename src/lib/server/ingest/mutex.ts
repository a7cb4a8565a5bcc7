/** One at a time, in the order of asking. */
export class Mutex {
	#last: Promise<unknown> = Promise.resolve();

	async run<T>(work: () => Promise<T>): Promise<T> {
		const before = this.#last;
		const mine = (async () => {
			await before.catch(() => undefined);
			return await work();
		})();
		this.#last = mine;
		return await mine;
	}
}
