/** Paper or blueprint, by the system or by hand; kept in this browser only. */
export type Theme = 'system' | 'paper' | 'blueprint';

const KEY = 'lodekeep-theme';
let current = $state<Theme>('system');

export const theme = {
	get now(): Theme {
		return current;
	},
	/** Reads what app.html put on the document before the first paint. */
	start(): void {
		const set = document.documentElement.dataset['theme'];
		current = set === 'paper' || set === 'blueprint' ? set : 'system';
	},
	set(next: Theme): void {
		current = next;
		if (next === 'system') {
			delete document.documentElement.dataset['theme'];
			localStorage.removeItem(KEY);
		} else {
			document.documentElement.dataset['theme'] = next;
			localStorage.setItem(KEY, next);
		}
		document.dispatchEvent(new Event('themechange'));
	}
};
