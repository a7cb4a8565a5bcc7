import { ESLint, Linter } from 'eslint';
import { expect, test } from 'vitest';

/**
 * Each direction rule of eslint.config.js is proved by a file that must fail and one that must pass
 * (house.md, traps: `no-restricted-imports` groups follow ignore-file rules and can miss silently).
 */
const CASES: readonly (readonly [file: string, code: string, refused: boolean])[] = [
	['src/lib/numeric/a.ts', `import '$lib/magnetics/vector';`, true],
	['src/lib/magnetics/a.ts', `import '$lib/numeric/median';`, false],
	['src/lib/magnetics/a.ts', `import '$lib/detection/params';`, true],
	['src/lib/detection/a.ts', `import '$lib/magnetics/vector';`, false],
	['src/lib/detection/a.ts', `import '$lib/drift/decompose';`, true],
	['src/lib/drift/a.ts', `import '$lib/detection/params';`, true],
	['src/lib/accuracy/a.ts', `import '$lib/magnetics/vector';`, true],
	['src/lib/schemas/a.ts', `import 'node:crypto';`, true],
	['src/lib/wire/a.ts', `import 'node:crypto';`, false],
	['src/lib/format/a.ts', `import '$app/environment';`, true],
	['src/lib/detection/a.ts', `import '$lib/server/log';`, true],
	['src/lib/detection/a.ts', `import '../../server/log';`, true],
	['src/lib/ui/a.ts', `import '$lib/components/plan/draw';`, true],
	['src/lib/ui/a.ts', `import '$lib/server/log';`, true],
	['src/lib/components/plan/a.ts', `import '$lib/ui/keys';`, false],
	['src/lib/components/plan/a.ts', `import '$lib/server/log';`, true],
	['src/lib/components/plan/a.ts', `import '$lib/wire/frames';`, true],
	['src/lib/server/ingest/a.ts', `import 'drizzle-orm';`, true],
	['src/lib/server/store/a.ts', `import 'drizzle-orm';`, false],
	['src/lib/server/store/a.ts', `import '$lib/server/ingest/pipeline';`, true],
	['src/lib/server/ingest/a.ts', `import '$lib/ui/keys';`, true],
	['src/routes/a.ts', `import 'drizzle-orm';`, true],
	['simulator/a.ts', `import '$lib/detection/group';`, true],
	['simulator/a.ts', `import '$lib/wire/frames';`, false]
];

const eslint = new ESLint();
const linter = new Linter();

async function refusals(file: string, code: string, rule: string): Promise<number> {
	const config = (await eslint.calculateConfigForFile(file)) as { rules: Linter.RulesRecord };
	return linter.verify(code, { rules: { [rule]: config.rules[rule] ?? 'off' } }).length;
}

test.each(CASES)('%s with "%s" is refused: %s', async (file, code, refused) => {
	expect((await refusals(file, code, 'no-restricted-imports')) > 0).toBe(refused);
});

test('SQL that drops what it cannot store is refused', async () => {
	// Put together here, since this file is under the rule itself.
	const lossy = `export const q = 'INSERT ${'IGNORE'} INTO reading VALUES (1)';`;
	expect(await refusals('src/lib/server/store/a.ts', lossy, 'no-restricted-syntax')).toBe(1);
	const replace = `export const q = \`REPLACE ${'INTO'} reading VALUES (1)\`;`;
	expect(await refusals('src/lib/server/store/a.ts', replace, 'no-restricted-syntax')).toBe(1);
});
