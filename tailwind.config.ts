import type { Config } from 'tailwindcss';

/** Tokens live as CSS custom properties in src/app.css; this file only names them for Tailwind. */
export default {
	content: ['./src/**/*.{html,svelte,ts}'],
	theme: {
		extend: {
			colors: {
				paper: 'var(--paper)',
				ink: 'var(--ink)',
				'ink-2': 'var(--ink-2)',
				hatch: 'var(--hatch)',
				hair: 'var(--hair)',
				wash: 'var(--wash)',
				accent: 'var(--accent)'
			},
			borderWidth: {
				fine: 'var(--line-fine)',
				medium: 'var(--line-medium)',
				bold: 'var(--line-bold)'
			},
			borderColor: { DEFAULT: 'var(--hair)' },
			fontSize: {
				small: ['0.786rem', '1.35'],
				body: ['1rem', '1.5'],
				lead: ['1.143rem', '1.45'],
				sheet: ['1.429rem', '1.3'],
				title: ['1.857rem', '1.2']
			},
			minHeight: { target: 'var(--target)', least: '24px' },
			minWidth: { target: 'var(--target)', least: '24px' },
			width: { notes: 'var(--notes)' },
			maxWidth: { read: '68ch' }
		}
	}
} satisfies Config;
