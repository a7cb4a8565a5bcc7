import { join } from 'node:path';
import {
	createBays,
	createNodes,
	createSite,
	placeNodes,
	siteExists,
	siteIsGone,
	waitUntilReady,
	type Api
} from './api-client';
import { demoPlan } from './demo-site';
import { extendTo, HISTORY_MS, makeDemoWorld, type DemoWorld } from './demo-world';
import { advanceMember, connectFleet, keepMember, obeyCommands, type Member } from './fleet';
import { playHistory } from './history';
import { loadKeepsake, newKeepsake, saveKeepsake, type Keepsake } from './keepsake';
import type { Sent } from './node-state';
import { tellIncident, tellStays } from './truth-file';
import type { Stay } from './truth';

/**
 * The demo: makes its site over the HTTP API, plays a week of history through the real wire, then
 * lives in real time. Started by the launcher; ends cleanly on SIGTERM and goes on where it was.
 */
const TICK_MS = 200;
const SAVE_EVERY_MS = 20_000;
const LOOK_AHEAD_MS = 6 * 3_600_000;
const DAY_MS = 86_400_000;
/** How often it asks whether its site is still wanted. */
const ASK_EVERY_MS = 20_000;

interface Settings {
	api: Api;
	broker: { host: string; port: number };
	dir: string;
}

function settings(env: NodeJS.ProcessEnv): Settings {
	const key = env['LODEKEEP_API_KEY'] ?? env['LODEKEEP_SIMULATOR_KEY'];
	if (key === undefined || key === '')
		throw new Error('LODEKEEP_API_KEY is not set: a key with scope provision');
	return {
		api: {
			baseUrl: env['LODEKEEP_API_URL'] ?? env['LODEKEEP_URL'] ?? 'http://127.0.0.1:5180',
			key
		},
		broker: { host: env['MQTT_HOST'] ?? '127.0.0.1', port: Number(env['MQTT_PORT'] ?? 1883) },
		dir: env['SIMULATOR_DIR'] ?? join(env['LODEKEEP_DATA'] ?? '.data', 'simulator')
	};
}

const say = (text: string): void => console.log(text);

/** Site, bays, nodes and their places, as far as they are not there yet. */
async function makeSite(
	api: Api,
	demo: DemoWorld,
	keepsake: Keepsake,
	keys: 'known' | 'new'
): Promise<void> {
	const { plan } = demo.world;
	if (!(await siteExists(api, plan.slug))) await createSite(api, plan);
	await createBays(api, plan);
	await createNodes(api, plan, (serial) => keepsake.keys[serial]!, keys);
	await placeNodes(api, plan, demo.bornMs - HISTORY_MS);
}

/** Real time from here on: every node is let live a little at each tick. */
async function live(
	demo: DemoWorld,
	members: readonly Member[],
	stop: AbortSignal,
	save: () => void,
	told: (stays: Stay[], upToMs: number) => void,
	isGone: () => Promise<boolean>
): Promise<void> {
	let savedMs = Date.now();
	let askedMs = savedMs;
	while (!stop.aborted) {
		const nowMs = Date.now();
		if (nowMs - askedMs > ASK_EVERY_MS) {
			askedMs = nowMs;
			if (await isGone()) return;
		}
		told(extendTo(demo, nowMs + LOOK_AHEAD_MS), nowMs);
		for (const member of members) {
			for (const sent of advanceMember(member, nowMs, 'live')) post(member, sent);
		}
		if (nowMs - savedMs > SAVE_EVERY_MS) {
			save();
			savedMs = nowMs;
		}
		await new Promise((resolve) => setTimeout(resolve, TICK_MS));
	}
}

/** The session sends again by itself until the PUBACK comes; ending the process ends the wait. */
function post(member: Member, { frame }: Sent): void {
	member.client.send(frame).catch(() => undefined);
}

async function run(stop: AbortSignal): Promise<void> {
	const { api, broker, dir } = settings(process.env);
	const found = loadKeepsake(dir);
	const bornMs = found?.bornMs ?? Date.now();
	const keepsake =
		found ??
		newKeepsake(
			demoPlan(0).nodes.map(({ serial }) => serial),
			bornMs
		);
	if (found === null) saveKeepsake(dir, keepsake);
	const demo = makeDemoWorld(keepsake.seed, bornMs, Date.now());
	if (!(await waitUntilReady(api, stop))) return;
	await makeSite(api, demo, keepsake, found === null ? 'new' : 'known');
	say(
		`site ${demo.world.plan.slug}: ${demo.world.plan.bays.length} bays, ${demo.world.plan.nodes.length} nodes`
	);
	const members = await connectFleet(demo, broker, keepsake);
	const save = (clean: 'clean' | 'running') => {
		for (const member of members)
			keepsake.nodes[member.node.config.serial] = keepMember(member, clean === 'clean');
		saveKeepsake(dir, keepsake);
	};
	const ahead: Stay[] = [];
	// A stay is told once its time has come: the world is drawn some hours ahead, bay by bay.
	const told = (stays: Stay[], upToMs: number) => {
		ahead.push(...stays);
		const due = ahead.filter(({ fromMs }) => fromMs <= upToMs);
		const later = ahead.filter(({ fromMs }) => fromMs > upToMs);
		ahead.splice(0, ahead.length, ...later);
		tellStays(
			dir,
			demo.world.plan,
			due.filter(({ fromMs }) => fromMs > keepsake.toldToMs)
		);
		keepsake.toldToMs = Math.max(keepsake.toldToMs, upToMs);
	};
	const startedMs = Date.now();
	const rows = await playHistory(demo, members, stop, told, progress(bornMs));
	say(
		`history sent: ${rows} rows in ${((Date.now() - startedMs) / 1000).toFixed(1)} s; from here on in real time`
	);
	for (const member of members) {
		const { serial } = member.node.config;
		await obeyCommands(
			member,
			() => save('running'),
			(sent) => post(member, sent),
			(verb, atMs) => tellIncident(dir, serial, verb, atMs)
		);
	}
	save('running');
	const isGone = async () => await siteIsGone(api, demo.world.plan.slug);
	await live(demo, members, stop, () => save('running'), told, isGone);
	await Promise.all(members.map(({ client }) => client.close()));
	save('clean');
	say('ended');
}

function progress(bornMs: number): (atMs: number, rows: number) => void {
	let day = 0;
	return (atMs, rows) => {
		const now = Math.floor((atMs - (bornMs - HISTORY_MS)) / DAY_MS);
		if (now > day && now <= 7) say(`history: day ${now} of 7, ${rows} rows`);
		day = now;
	};
}

const stopping = new AbortController();
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => stopping.abort());
await run(stopping.signal);
process.exit(0);
