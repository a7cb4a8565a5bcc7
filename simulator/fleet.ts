import { takeCommand, type Obeyed } from './commands';
import { demoNodeConfig, HISTORY_MS, type DemoWorld } from './demo-world';
import { troubleOf } from './demo-site';
import { keepNode, recallNode, SEQ_BLOCK, type Keepsake, type KeptNode } from './keepsake';
import { advanceNode, setHabit } from './node';
import { connectNode, type Broker, type NodeClient } from './node-client';
import { batteryMv, bootUp, flush } from './node-frames';
import { newNode, type Batching, type NodeState, type Sent } from './node-state';

/** A node that lives and its session with the broker. */
export interface Member {
	node: NodeState;
	client: NodeClient;
	keyHex: string;
	obeyed: Obeyed[];
	/** Not heard from then on. */
	silentFromMs: number;
	/** Numbers up to here are kept as used. */
	seqReserved: number;
	/** Learning is over from here on: the node reports by its usual habit. */
	usualFromMs: number;
}

/** Learning in the history takes as long as it would have with the server asking for it (method 3). */
const LEARNING_MS = 4 * 60_000;
const USUAL = { periodS: 60, deltaMg: 8 };
/** A second's rows of a burst to a message: a bay changes well within 5 s of its vehicle. */
const LIVE_BATCHING: Batching = { rows: 4, holdMs: 900 };
const HISTORY_BATCHING: Batching = { rows: 120, holdMs: Infinity };

export async function connectFleet(
	demo: DemoWorld,
	broker: Broker,
	keepsake: Keepsake
): Promise<Member[]> {
	const { plan } = demo.world;
	return await Promise.all(
		plan.nodes.map(async ({ serial, bayIndex }, index): Promise<Member> => {
			const startMs = demo.bornMs - HISTORY_MS;
			const node = newNode(demoNodeConfig(demo, index), demo.world.fields[index]!, startMs);
			const kept = keepsake.nodes[serial];
			if (kept !== undefined) recallNode(node, kept);
			const keyHex = keepsake.keys[serial]!;
			return {
				node,
				client: await connectNode(broker, serial, Buffer.from(keyHex, 'hex')),
				keyHex,
				obeyed: kept?.obeyed ?? [],
				silentFromMs: troubleOf(plan.bays[bayIndex]!.code, demo.bornMs).silentFromMs,
				seqReserved: node.seq + SEQ_BLOCK,
				usualFromMs: startMs + LEARNING_MS
			};
		})
	);
}

/** Lets a node live until a time and collects what it sends; a silent one says nothing. */
export function advanceMember(member: Member, toMs: number, batching: 'history' | 'live'): Sent[] {
	const { node } = member;
	const sent: Sent[] = [];
	const out = (message: Sent) => sent.push(message);
	node.config.batching = batching === 'history' ? HISTORY_BATCHING : LIVE_BATCHING;
	const untilMs = Math.min(toMs, member.silentFromMs);
	if (node.boot === 0) bootUp(node, node.atMs, 'power', out);
	if (node.atMs < member.usualFromMs && untilMs >= member.usualFromMs) {
		advanceNode(node, member.usualFromMs, out);
		setHabit(node, USUAL, member.usualFromMs);
	}
	if (untilMs > node.atMs) advanceNode(node, untilMs, out);
	if (batching === 'history') flush(node, untilMs, out);
	else if (node.pending.length > 0 && toMs - node.pendingFromMs >= LIVE_BATCHING.holdMs) {
		flush(node, untilMs, out);
	}
	return sent;
}

/** Marks a message of the past as first sent now: a backlog (protocol key 23). */
export const sentNow = ({ frame }: Sent, nowMs: number): Sent['frame'] => ({
	...frame,
	sentMs: nowMs
});

export const keepMember = (member: Member, clean: boolean): KeptNode =>
	keepNode(
		member.node,
		member.keyHex,
		member.obeyed,
		clean ? member.node.seq : Math.max(member.seqReserved, member.node.seq + SEQ_BLOCK)
	);

/** Takes commands from now on; `save` must have stored the fleet before it returns. */
export async function obeyCommands(
	member: Member,
	save: () => void,
	post: (sent: Sent) => void,
	told: (verb: string, atMs: number) => void
): Promise<void> {
	await member.client.listen((command) => {
		const { node } = member;
		const nowMs = Date.now();
		if (nowMs >= member.silentFromMs) return;
		for (const sent of advanceMember(member, nowMs, 'live')) post(sent);
		node.atMs = Math.max(node.atMs, nowMs);
		const cellMv = batteryMv(node, nowMs, node.tempDc / 10);
		takeCommand(node, member.obeyed, command, nowMs, cellMv, save, post);
		told(command.verb, nowMs);
	});
}
