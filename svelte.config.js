import adapter from '@sveltejs/adapter-node';
import { vitePreprocess } from '@sveltejs/vite-plugin-svelte';

/** Kit's generated tsconfig covers only src: these rooms need the same strictness (house.md, traps). */
const RELATIVE_TO_KIT = ['simulator', 'tests'].flatMap((dir) => [`../${dir}/**/*.ts`]);

/** @type {import('@sveltejs/kit').Config} */
export default {
	preprocess: vitePreprocess(),
	kit: {
		adapter: adapter({ out: 'build', precompress: false }),
		// components/sheet/device.svelte.ts does it, after the first drawing.
		serviceWorker: { register: false },
		// A shell kept by the service worker is opened from other paths too.
		paths: { relative: false },
		// hooks.server.ts checks Origin itself, for every content type (a plain 403 would break problem+json).
		csrf: { trustedOrigins: ['*'] },
		csp: {
			mode: 'nonce',
			directives: {
				'default-src': ['self'],
				'script-src': ['self'],
				'style-src': ['self', 'unsafe-inline'],
				'img-src': ['self', 'data:', 'blob:'],
				'font-src': ['self'],
				'connect-src': ['self'],
				'worker-src': ['self'],
				'object-src': ['none'],
				'base-uri': ['none'],
				'frame-ancestors': ['none'],
				'form-action': ['self']
			}
		},
		typescript: {
			config: (config) => ({
				...config,
				include: [
					...config.include,
					...RELATIVE_TO_KIT,
					'../tailwind.config.ts',
					'../drizzle.config.ts',
					'../vite.config.ts'
				]
			})
		}
	}
};
