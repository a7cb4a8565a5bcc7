import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { createInterface } from 'node:readline';

/** A process of ours under tsx that prints one JSON line when it is ready. */
export interface Running<Ready> {
	child: ChildProcess;
	ready: Ready;
	/** Ends it and waits until it is gone. */
	kill(signal: NodeJS.Signals): Promise<void>;
}

export async function run<Ready>(script: string, env: NodeJS.ProcessEnv): Promise<Running<Ready>> {
	const child = spawn(process.execPath, ['--import', 'tsx', script], {
		env: { ...process.env, ...env },
		stdio: ['ignore', 'pipe', 'inherit']
	});
	const [line] = (await once(createInterface({ input: child.stdout }), 'line')) as [string];
	return {
		child,
		ready: JSON.parse(line) as Ready,
		async kill(signal) {
			if (child.exitCode !== null || child.signalCode !== null) return;
			const end = once(child, 'exit');
			child.kill(signal);
			// A stopped process only dies by this.
			if (signal === 'SIGKILL') child.kill('SIGCONT');
			await end;
		}
	};
}
