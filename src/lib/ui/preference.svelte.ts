/** A yes-or-no choice kept in this browser. */
export class Preference {
	#name: string;
	#value = $state(false);
	constructor(name: string, preset: boolean) {
		this.#name = `lodekeep-${name}`;
		this.#value = preset;
		if (typeof localStorage === 'undefined') return;
		const kept = localStorage.getItem(this.#name);
		if (kept !== null) this.#value = kept === 'yes';
	}
	get on(): boolean {
		return this.#value;
	}
	set on(next: boolean) {
		this.#value = next;
		if (typeof localStorage !== 'undefined') localStorage.setItem(this.#name, next ? 'yes' : 'no');
	}
}

/** Single-key shortcuts can be switched off (WCAG 2.1.4). */
export const singleKeys = new Preference('single-keys', true);
/** Plain tone instead of section hatching. */
export const plainTone = new Preference('plain-tone', false);
