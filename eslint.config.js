import js from '@eslint/js';
import { createTypeScriptImportResolver } from 'eslint-import-resolver-typescript';
import importX from 'eslint-plugin-import-x';
import svelte from 'eslint-plugin-svelte';
import globals from 'globals';
import ts from 'typescript-eslint';
import svelteConfig from './svelte.config.js';

/** Rooms of src/lib that a pure room may import besides itself (house.md, 'Who may import whom'). */
const PURE = {
	numeric: [],
	magnetics: ['numeric'],
	detection: ['numeric', 'magnetics'],
	drift: ['numeric', 'magnetics'],
	accuracy: ['numeric'],
	wire: [],
	schemas: [],
	format: []
};
const ALL = [...Object.keys(PURE), 'server', 'ui', 'components'];
const UP_AND_OVER = { regex: '^\\.\\./\\.\\.', message: 'Use $lib/… across folders, never ../..' };
/** Forbids `$lib/<room>` for every room not allowed. */
const onlyRooms = (allowed) => ({
	regex: `^\\$lib/(?!(?:${allowed.length === 0 ? '$^' : allowed.join('|')})(?:/|$))`,
	message: `This room may import only: ${allowed.join(', ') || 'nothing of $lib'}.`
});
const restrict = (...patterns) => ({
	'no-restricted-imports': ['error', { patterns: [UP_AND_OVER, ...patterns] }]
});
const NO_KIT = {
	regex: '^(\\$app|\\$env|@sveltejs)(/|$)',
	message: 'Pure rooms know no SvelteKit.'
};
const NO_NODE = { regex: '^node:', message: 'Pure rooms run in a browser too: no Node built-ins.' };
const NO_DRIZZLE = { regex: '^drizzle-', message: 'Only src/lib/server/store imports drizzle.' };
const NO_ROUTES = { regex: '(^|/)routes(/|$)', message: 'Nothing imports routes.' };
const NO_LOSSY_SQL = {
	'no-restricted-syntax': [
		'error',
		...[
			'Literal[value=/\\b(INSERT\\s+IGNORE|REPLACE\\s+INTO)\\b/i]',
			'TemplateElement[value.raw=/\\b(INSERT\\s+IGNORE|REPLACE\\s+INTO)\\b/i]'
		].map((selector) => ({
			selector,
			message:
				'INSERT IGNORE and REPLACE drop what they cannot store, and it would be acknowledged.'
		}))
	]
};

const pureRooms = Object.entries(PURE).map(([room, allowed]) => ({
	files: [`src/lib/${room}/**/*.{ts,svelte}`],
	ignores: ['**/*.test.ts'],
	rules: restrict(
		onlyRooms([room, ...allowed]),
		NO_KIT,
		NO_DRIZZLE,
		NO_ROUTES,
		...(room === 'wire' ? [] : [NO_NODE])
	)
}));

export default ts.config(
	{
		ignores: [
			'node_modules',
			'.svelte-kit',
			'build',
			'.data',
			'.tmp',
			'drizzle',
			'static',
			'tests/.out'
		]
	},
	js.configs.recommended,
	...ts.configs.recommendedTypeChecked,
	...svelte.configs['flat/recommended'],
	{
		languageOptions: {
			globals: { ...globals.node, ...globals.browser },
			parserOptions: {
				projectService: { allowDefaultProject: ['*.js', 'src/launch/*.mjs'] },
				extraFileExtensions: ['.svelte']
			}
		},
		plugins: { 'import-x': importX },
		settings: { 'import-x/resolver-next': [createTypeScriptImportResolver()] },
		rules: {
			...NO_LOSSY_SQL,
			'no-undef': 'off',
			'import-x/no-cycle': ['error', { ignoreExternal: true, maxDepth: 8 }],
			'@typescript-eslint/no-floating-promises': 'error',
			'@typescript-eslint/return-await': ['error', 'always'],
			'@typescript-eslint/strict-boolean-expressions': [
				'error',
				{
					allowNumber: false,
					allowString: false,
					allowNullableObject: true,
					allowNullableBoolean: false
				}
			],
			'@typescript-eslint/no-unused-vars': [
				'error',
				{ argsIgnorePattern: '^_', varsIgnorePattern: '^_' }
			],
			'@typescript-eslint/consistent-type-imports': 'error',
			'@typescript-eslint/require-await': 'off',
			'@typescript-eslint/no-misused-promises': [
				'error',
				{ checksVoidReturn: { arguments: false, attributes: false } }
			],
			'svelte/no-navigation-without-resolve': 'off'
		}
	},
	{
		files: ['**/*.svelte', '**/*.svelte.ts'],
		languageOptions: {
			parserOptions: {
				parser: ts.parser,
				svelteConfig,
				projectService: true,
				extraFileExtensions: ['.svelte']
			}
		},
		rules: {
			'import-x/no-cycle': 'off',
			'@typescript-eslint/no-unsafe-assignment': 'off',
			'@typescript-eslint/no-unsafe-argument': 'off',
			'@typescript-eslint/no-unsafe-member-access': 'off',
			'@typescript-eslint/no-unsafe-call': 'off',
			'@typescript-eslint/no-unsafe-return': 'off',
			// What the Svelte parser cannot type reads as any in a template; svelte-check holds the types there.
			'@typescript-eslint/strict-boolean-expressions': [
				'error',
				{
					allowNumber: false,
					allowString: false,
					allowAny: true,
					allowNullableObject: true,
					allowNullableBoolean: false
				}
			]
		}
	},
	...pureRooms,
	{ files: ['src/lib/ui/**'], rules: restrict(onlyRooms(['ui', 'format']), NO_DRIZZLE, NO_ROUTES) },
	{
		files: ['src/lib/components/**'],
		ignores: ['**/*.test.ts'],
		rules: restrict(
			onlyRooms([
				'components',
				'ui',
				'format',
				'schemas',
				'numeric',
				'magnetics',
				'detection',
				'drift',
				'accuracy'
			]),
			NO_DRIZZLE,
			NO_ROUTES
		)
	},
	{
		files: ['src/lib/server/**'],
		ignores: ['src/lib/server/store/**', '**/*.test.ts'],
		rules: restrict(
			onlyRooms(ALL.filter((room) => room !== 'ui' && room !== 'components')),
			NO_DRIZZLE,
			NO_ROUTES
		)
	},
	{
		files: ['src/lib/server/store/**'],
		ignores: ['**/*.test.ts'],
		rules: restrict(
			{
				regex: '^\\$lib/server/(?!(store|config|log)(/|$))',
				message: 'The store imports no feature.'
			},
			{ regex: '^\\$lib/(ui|components)(/|$)', message: 'The store knows no screens.' },
			NO_ROUTES
		)
	},
	{
		// Code shared with the broker and the launcher runs outside Kit.
		files: [
			'src/launch/**',
			'src/lib/server/broker/**',
			'src/lib/server/config.ts',
			'src/lib/server/log.ts',
			'src/lib/server/store/**'
		],
		rules: { 'no-restricted-modules': ['error', { patterns: ['$app/*', '$env/*'] }] }
	},
	{
		files: ['simulator/**'],
		ignores: ['**/*.test.ts'],
		rules: restrict(onlyRooms(['wire', 'magnetics']), NO_DRIZZLE, NO_KIT, NO_ROUTES)
	},
	{
		files: ['src/routes/**', 'src/hooks.server.ts', 'src/launch/**'],
		rules: restrict(NO_DRIZZLE)
	},
	{
		files: ['src/routes/**/*.svelte', 'src/lib/components/**/*.svelte', 'src/lib/ui/**/*.svelte'],
		rules: {
			'@typescript-eslint/no-restricted-imports': [
				'error',
				{
					patterns: [
						{
							regex: '^\\$lib/(server|wire)(/|$)',
							message: 'Server code never reaches the browser.'
						}
					]
				}
			]
		}
	},
	{ files: ['**/*.js', '**/*.mjs'], ...ts.configs.disableTypeChecked },
	{ files: ['eslint.config.js'], rules: { 'no-restricted-syntax': 'off' } },
	{
		files: ['**/*.js', '**/*.mjs'],
		rules: {
			'@typescript-eslint/strict-boolean-expressions': 'off',
			'@typescript-eslint/return-await': 'off',
			'@typescript-eslint/no-floating-promises': 'off',
			'@typescript-eslint/no-misused-promises': 'off'
		}
	},
	{
		files: ['**/*.test.ts', 'tests/**'],
		rules: {
			'@typescript-eslint/no-non-null-assertion': 'off',
			'@typescript-eslint/no-unsafe-assignment': 'off',
			'@typescript-eslint/no-unsafe-member-access': 'off',
			'@typescript-eslint/no-unsafe-argument': 'off'
		}
	}
);
