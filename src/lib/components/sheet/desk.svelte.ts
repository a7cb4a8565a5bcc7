/** What this browser's desk has open; one person a browser, never on the server. */
let finding = $state(false);
let showingKeys = $state(false);
let lastSite = $state<string | null>(null);

export const desk = {
	get finding(): boolean {
		return finding;
	},
	set finding(now: boolean) {
		finding = now;
	},
	get showingKeys(): boolean {
		return showingKeys;
	},
	set showingKeys(now: boolean) {
		showingKeys = now;
	},
	/** The site last looked at, so that sheets of a site can be opened from any sheet. */
	get lastSite(): string | null {
		return lastSite;
	},
	set lastSite(slug: string | null) {
		if (typeof window !== 'undefined') lastSite = slug;
	}
};
