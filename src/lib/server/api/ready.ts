import type { Instance } from './instance';

export interface Readiness {
	database: boolean;
	broker: boolean;
	subscriber: boolean;
}

const WAIT_MS = 1_000;

async function databaseAnswers(app: Instance): Promise<boolean> {
	const asked = app.store.pool.query('SELECT 1').then(
		() => true,
		() => false
	);
	let timer: NodeJS.Timeout | undefined;
	const late = new Promise<boolean>((resolve) => {
		timer = setTimeout(() => {
			resolve(false);
		}, WAIT_MS);
	});
	return await Promise.race([asked, late]).finally(() => {
		clearTimeout(timer);
	});
}

/** A copy that waits while another runs the pipeline has no need of the broker: it is ready to wait. */
export async function readiness(app: Instance): Promise<Readiness> {
	const { state, brokerConnected, pipeline } = app.ingest();
	const waiting = state === 'idle';
	return {
		database: await databaseAnswers(app),
		broker: waiting || brokerConnected === true,
		subscriber: waiting || (state === 'running' && pipeline !== null && pipeline.hold === null)
	};
}
