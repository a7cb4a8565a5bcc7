// npm start. Plain JavaScript: on a fresh clone there are no packages yet.
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import {
	ROOT,
	checkNode,
	installDebian,
	installNpm,
	orEnd,
	syncKit,
	DATABASE_PACKAGES
} from './prepare.mjs';

process.chdir(ROOT);
process.title = 'lodekeep start';
if (existsSync(join(ROOT, '.env'))) process.loadEnvFile(join(ROOT, '.env'));
orEnd(() => {
	checkNode();
	installDebian(process.env.DATABASE_URL ? { setpriv: 'util-linux' } : DATABASE_PACKAGES);
	installNpm();
	syncKit();
});

const { register } = await import('tsx/esm/api');
register();
await import('./run.ts');
