import { existsSync } from 'node:fs';
import { spawnSync } from 'node:child_process';
import { join } from 'node:path';

/**
 * `npm run bench`: one JSON line a figure, each with a `bench` name. Every bench is a process of its
 * own, so that none measures what another left behind. Names as arguments run only those.
 */
const BENCHES = ['ingest', 'latency', 'detector'];
const wanted = process.argv.slice(2);
let failed = false;
for (const name of BENCHES) {
	if (wanted.length > 0 && !wanted.includes(name)) continue;
	const script = join(import.meta.dirname, `${name}.ts`);
	if (!existsSync(script)) continue;
	const { status } = spawnSync(process.execPath, ['--import', 'tsx', script], { stdio: 'inherit' });
	failed ||= status !== 0;
}
process.exitCode = failed ? 1 : 0;
