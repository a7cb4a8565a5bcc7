import { createServer } from 'node:net';
import { StartProblem } from './mariadb';

/** Refuses with a sentence when nobody could listen there: better now than after a minute of building. */
export async function requireFree(host: string, port: number, variable: string): Promise<void> {
	if (port === 0) return;
	const code = await new Promise<string | null>((resolve) => {
		const server = createServer();
		server.once('error', (error: NodeJS.ErrnoException) => {
			resolve(error.code ?? 'unknown');
		});
		server.listen({ host, port, exclusive: true }, () => {
			server.close(() => {
				resolve(null);
			});
		});
	});
	if (code === null) return;
	throw new StartProblem(sentence(code, host, port, variable));
}

function sentence(code: string, host: string, port: number, variable: string): string {
	if (code === 'EADDRINUSE')
		return `port ${port} on ${host} is taken by another program. Stop that one, or set ${variable} to a free port.`;
	if (code === 'EACCES')
		return `this user may not listen on port ${port}. Set ${variable} to a port above 1023.`;
	return `nobody can listen on ${host}:${port} (${code}). Check ${variable.replace('PORT', 'HOST')} and ${variable}.`;
}
