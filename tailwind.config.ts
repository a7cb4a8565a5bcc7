import type { Config } from 'tailwindcss';

/** Tokens live as CSS custom properties in src/app.css; this file only names them for Tailwind. */
export default {
	content: ['./src/**/*.{html,svelte,ts}'],
	theme: { extend: {} }
} satisfies Config;
