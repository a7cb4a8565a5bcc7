import { openCommand, sealUp } from '$lib/wire/frames';
import { upTopic } from '$lib/wire/topics';
import type { UpFrame } from '$lib/wire/types';
import { takeCommand, type Obeyed } from '../../simulator/commands';
import type { NodeEvent } from '../../simulator/film';
import { recordedSeries } from '../../simulator/geomagnetic';
import { advanceNode } from '../../simulator/node';
import { nodeField } from '../../simulator/node-field';
import { bootUp } from '../../simulator/node-frames';
import { newNode, type NodeState } from '../../simulator/node-state';
import { nodeCourse } from '../../simulator/temperature';
import { eventually, type TestNode } from './ingest';
import type { MqttNode } from './mqtt-node';

/** How a street reaches the server, and who sends what was ordered. */
export interface Line {
	client(node: TestNode): Promise<MqttNode>;
	sendCommands(atMs: number): Promise<void>;
	/** For a command to come. */
	waitMs?: number;
}

/** The simulator's node (true physics, obeys as protocol.md says) on the real broker, in a time of its own. */
export class Street {
	readonly state: NodeState;
	readonly known: Obeyed[] = [];
	/** Frames that never leave the node. */
	mute = false;
	atMs: number;
	#heard = 0;

	constructor(
		readonly node: TestNode,
		events: NodeEvent[],
		startMs: number,
		private readonly line: Line
	) {
		this.atMs = startMs;
		const place = { serial: node.serial, bayIndex: 0, eastM: 0, northM: 0, headingDeg: 0 };
		const housing = { rollDeg: 0, pitchDeg: 0, profileCode: 'amr-18-16384' };
		const weather = { meanC: 15, halfSwingC: 0, spellC: 0, cloudC: 0, lowestC: -20 };
		const field = nodeField({ ...place, ...housing }, [180, 20, 440], recordedSeries(startMs, 1));
		this.state = newNode(
			{
				...{ index: 0, serial: node.serial, profileCode: 'amr-18-16384', events },
				sensor: {
					...{ countsPerGauss: 16_384, limit: 131_072, noiseMg: 0.6 },
					...{ offsetMg: [100, -50, 25], offsetPerC: [0, 0, 0] },
					...{ kappaPerC: -0.003, referenceC: 25 }
				},
				course: nodeCourse({ ...weather, highestC: 60, localOffsetMs: 0, seed: 1 }, 0),
				...{
					burstHz: 2,
					habit: { periodS: 2, deltaMg: 8 },
					batching: { rows: 30, holdMs: 60_000 }
				},
				...{ clockOffsetMs: 0, battery: { fullMv: 3600, endsFromMs: Infinity } },
				...{ firmware: 'reed 2.4', keys: 'full', seed: 7 }
			},
			field,
			startMs
		);
	}

	async boot(): Promise<void> {
		await this.#send((out) => bootUp(this.state, this.atMs, 'power', out));
	}

	async until(atMs: number): Promise<void> {
		this.atMs = atMs;
		await this.#send((out) => advanceNode(this.state, atMs, out));
	}

	/** Lets the sender send, and the node obey what reaches it. */
	async obey(count = 1): Promise<void> {
		const client = await this.line.client(this.node);
		await this.line.sendCommands(this.atMs);
		await eventually(
			async () => client.commands.length,
			(n) => n >= this.#heard + count,
			this.line.waitMs ?? 2_000
		);
		for (const bytes of client.commands.slice(this.#heard)) {
			const opened = openCommand(`lodekeep/1/${this.node.serial}/down`, bytes, this.node.key.key);
			if (!opened.ok) throw new Error(opened.reason);
			await this.#send((out) =>
				takeCommand(this.state, this.known, opened.frame, this.atMs, 3600, () => undefined, out)
			);
		}
		this.#heard = client.commands.length;
	}

	/** What came so far is not obeyed. */
	async ignore(): Promise<void> {
		this.#heard = (await this.line.client(this.node)).commands.length;
	}

	async #send(live: (out: (sent: { frame: UpFrame }) => void) => void): Promise<void> {
		const frames: UpFrame[] = [];
		live(({ frame }) => frames.push(frame));
		const { client } = await this.line.client(this.node);
		for (const frame of this.mute ? [] : frames) {
			// Without key 23: this street lies hours back, and the server would call its clock off.
			const sent = 'sentMs' in frame ? { ...frame, sentMs: null } : frame;
			const topic = upTopic(this.node.serial, frame.kind);
			const bytes = Buffer.from(sealUp(topic, sent, this.node.key.key, 5));
			await client.publishAsync(topic, bytes, { qos: 1 });
		}
	}
}
