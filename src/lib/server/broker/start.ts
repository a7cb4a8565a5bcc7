import { Aedes } from 'aedes';
import { once } from 'node:events';
import { createServer, type AddressInfo, type Server, type Socket } from 'node:net';
import { createServer as createTlsServer } from 'node:tls';
import { AppSession } from './app-session';
import { connackError, linkOf, signIn } from './authenticate';
import { Commands } from './authorize';
import type { BrokerStats } from './counters';
import { NodeDirectory } from './directory';
import { Intake } from './intake';
import { LIMITS, type Limits } from './limits';
import { NodeLink } from './node-link';

export interface BrokerConfig {
	host: string;
	/** 0 takes a free port. */
	port: number;
	/** PEM texts; port 0 takes a free one. */
	tls: { port: number; cert: string; key: string } | null;
	/** Messages a second a node (`MQTT_RATE`). */
	ratePerS: number;
	/** Shared with the app; from loopback only. */
	linkSecret: string;
	limits?: Partial<Limits>;
}

export interface RunningBroker {
	port: number;
	tlsPort: number | null;
	stats(): BrokerStats;
	/** Stops taking connections, waits up to 2 s for receipts under way, ends all. */
	close(): Promise<void>;
}

const LOCAL = ['127.0.0.1', '0.0.0.0', '::', '::1', 'localhost'];
const DRAIN_MS = 2_000;

/** Starts the broker; rejects when a port can't be had or the certificate doesn't read. */
export async function start(config: BrokerConfig): Promise<RunningBroker> {
	const limits: Limits = { ...LIMITS, ...config.limits };
	const directory = new NodeDirectory(limits.directoryVouchMs);
	const intake = new Intake(limits, Date.now());
	const session = new AppSession(intake, directory);
	const aedes = await makeAedes(config, intake, directory, session);
	const accept = (socket: Socket) => {
		const link = new NodeLink(socket, intake);
		intake.links.add(link);
		aedes.handle(link);
	};
	const servers = [await listen(createServer(accept), config.host, config.port)];
	const port = portOf(servers[0]!);
	// The app's link is taken from loopback only, so there must be a way in from there.
	if (!LOCAL.includes(config.host)) {
		servers.push(await listen(createServer(accept), '127.0.0.1', port));
	}
	let tlsPort: number | null = null;
	if (config.tls !== null) {
		const { cert, key } = config.tls;
		const secure = createTlsServer(
			{ cert, key, handshakeTimeout: limits.connectTimeoutMs },
			accept
		);
		secure.on('tlsClientError', () => intake.refused('malformed'));
		servers.push(await listen(secure, config.host, config.tls.port));
		tlsPort = portOf(secure);
	}
	const sweep = setInterval(() => cutSilent(intake), 1_000);
	return {
		port,
		tlsPort,
		stats: () => intake.stats(directory.size),
		async close() {
			clearInterval(sweep);
			const closed = servers.map(async (server) => await closing(server));
			await drained(intake, session);
			session.close();
			await new Promise<void>((resolve) => aedes.close(resolve));
			for (const link of [...intake.links]) link.destroy();
			await Promise.all(closed);
		}
	};
}

async function makeAedes(
	config: BrokerConfig,
	intake: Intake,
	directory: NodeDirectory,
	session: AppSession
): Promise<Aedes> {
	const rules = { directory, linkSecret: config.linkSecret, ratePerS: config.ratePerS };
	const commands = new Commands(intake);
	const aedes = await Aedes.createBroker({
		connectTimeout: intake.limits.connectTimeoutMs,
		// Writes never wait in aedes: NodeLink cuts who does not read.
		drainTimeout: 0,
		preConnect(client, packet, done) {
			const link = linkOf(client);
			link.keepaliveMs = (packet.keepalive ?? 0) * 1_000;
			// Aedes sees neither messages nor pings, so it can't judge silence: cutSilent does.
			packet.keepalive = 0;
			link.will = packet.will ? { topic: packet.will.topic, qos: packet.will.qos ?? 0 } : null;
			done(null, true);
		},
		authenticate(client, user, password, done) {
			const link = linkOf(client);
			const given = { clientId: client.id, user, password };
			const result = signIn(rules, link, given, Date.now());
			if (result.ok) {
				link.role = result.role;
				done(null, true);
				return;
			}
			intake.refused(result.reason);
			done(connackError(result.code, result.reason), false);
		},
		authorizePublish: (client, packet, done) => commands.publish(client, packet, done),
		authorizeSubscribe: (client, subscription, done) =>
			commands.subscribe(client, subscription, done)
	});
	aedes.on('clientReady', (client) => {
		const link = linkOf(client);
		if (link.role?.kind === 'app') session.begin(client);
		if (link.role?.kind === 'node') {
			intake.nodes.set(link.role.serial, link);
			session.networks.note(link.role.serial, link.socket.remoteAddress);
			commands.isBack(link.role.serial);
		}
		link.open();
	});
	// Without a listener a fault of one stored will would end the process.
	aedes.on('error' as never, () => undefined);
	return aedes;
}

function cutSilent(intake: Intake): void {
	const nowMs = Date.now();
	for (const link of [...intake.links]) {
		if (!link.isSilent(nowMs)) continue;
		intake.totals.keepaliveCutTotal++;
		link.destroy();
	}
}

async function drained(intake: Intake, session: AppSession): Promise<void> {
	const untilMs = Date.now() + DRAIN_MS;
	for (const link of intake.links) link.gated ||= link.role?.kind === 'node';
	while (session.present && intake.held.size > 0 && Date.now() < untilMs) {
		await new Promise((resolve) => setTimeout(resolve, 20));
	}
}

async function listen<S extends Server>(server: S, host: string, port: number): Promise<S> {
	server.listen({ host, port, backlog: 4_096 });
	await once(server, 'listening');
	return server;
}

/** Resolves when the last connection of it is gone. */
const closing = async (server: Server): Promise<void> =>
	await new Promise((resolve) => server.close(() => resolve()));

const portOf = (server: Server): number => (server.address() as AddressInfo).port;
