import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';

/** Suites that start MariaDB, the broker or a browser: two cores. */
const PATIENT = { testTimeout: 120_000, hookTimeout: 120_000 };
/** One file at a time where work or time itself is judged. */
const SERIAL = { ...PATIENT, fileParallelism: false };
/** Two at a time where tests mostly wait: measured 196 s against 310 s. */
const PAIRED = { ...PATIENT, fileParallelism: true, maxWorkers: 2 };

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
					...(name === 'integration' ? PAIRED : SERIAL)
				}
			}))
		]
	}
});
