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

export async function readiness(app: Instance): Promise<Readiness> {
	return { database: await databaseAnswers(app), ...app.ingestReady() };
}
