// The built app behind TLS of its own (TLS_CERT, TLS_KEY); adapter-node's own server speaks plain HTTP.
import { readFileSync } from 'node:fs';
import { createServer } from 'node:https';
import process from 'node:process';

const { handler } = await import(new URL('../../build/handler.js', import.meta.url).href);
const files = () => ({
	cert: readFileSync(process.env.TLS_CERT),
	key: readFileSync(process.env.TLS_KEY)
});
const server = createServer(files(), handler);

/** A renewed certificate is taken up without a restart. */
const RENEWAL_LOOK_MS = 3_600_000;
setInterval(() => {
	try {
		server.setSecureContext(files());
	} catch (error) {
		console.error(`TLS files cannot be read, the former ones stay in use: ${error.message}`);
	}
}, RENEWAL_LOOK_MS).unref();

let ending = false;
function end() {
	if (ending) return;
	ending = true;
	const forced = setTimeout(
		() => server.closeAllConnections(),
		Number(process.env.SHUTDOWN_TIMEOUT ?? 10) * 1000
	);
	server.closeIdleConnections();
	server.close(() => {
		clearTimeout(forced);
		process.emit('sveltekit:shutdown', 'SIGTERM');
	});
}
process.on('SIGTERM', end);
process.on('SIGINT', end);

server.listen(Number(process.env.PORT), process.env.HOST, () => {
	console.log(`Listening on https://${process.env.HOST}:${process.env.PORT}`);
});
