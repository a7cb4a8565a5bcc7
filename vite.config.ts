import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';

/** Suites that start MariaDB, the broker or a browser run one file at a time: two cores. */
const SERIAL = { fileParallelism: false, testTimeout: 120_000, hookTimeout: 120_000 };

export default defineConfig({
	plugins: [tailwindcss(), sveltekit()],
	test: {
		projects: [
			{
				extends: true,
				test: {
					name: 'unit',
					environment: 'node',
					include: ['src/**/*.test.ts', 'simulator/**/*.test.ts']
				}
			},
			...(['integration', 'accuracy', 'faults', 'e2e', 'long'] as const).map((name) => ({
				extends: true as const,
				test: {
					name,
					environment: 'node',
					include: [`tests/${name}/**/*.test.ts`],
					...SERIAL
				}
			}))
		]
	}
});
