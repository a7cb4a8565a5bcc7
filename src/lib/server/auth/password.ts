import { hash, verify } from '@node-rs/argon2';

/** argon2id with 19 MiB, 2 passes, 1 lane: the library's default and the usual recommendation [M]. */
const OPTIONS = { memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const;

export const MIN_PASSWORD_CHARS = 12;
export const MAX_PASSWORD_CHARS = 200;

export const hashPassword = async (password: string): Promise<string> =>
	await hash(password.normalize('NFKC'), OPTIONS);

/** Made once, so that an unknown address costs as much time as a wrong password. */
let decoy: Promise<string> | null = null;

/** At most this many at once: each takes 19 MiB and a thread of the pool that the store also needs. */
const MAX_AT_ONCE = 2;
/** About 3 s of work in front of the last one: whoever comes then is asked to come again. */
const MAX_WAITING = 60;
let running = 0;
const waiting: (() => void)[] = [];

export const passwordsBusy = (): boolean => waiting.length >= MAX_WAITING;

async function inTurn<T>(work: () => Promise<T>): Promise<T> {
	if (running >= MAX_AT_ONCE) await new Promise<void>((go) => waiting.push(go));
	running++;
	try {
		return await work();
	} finally {
		running--;
		waiting.shift()?.();
	}
}

/** `stored` null = no such person, or none yet: compared with a decoy and always false. */
export async function checkPassword(stored: string | null, password: string): Promise<boolean> {
	if (password.length > MAX_PASSWORD_CHARS) return false;
	return await inTurn(async () => {
		decoy ??= hashPassword('a decoy that nobody types');
		const right = await verify(stored ?? (await decoy), password.normalize('NFKC'));
		return stored !== null && right;
	});
}

/** Length counts, not classes of characters; the address and the name are no passwords. */
export function passwordProblem(
	password: string,
	person: { email: string; name: string }
): string | null {
	if (password.length < MIN_PASSWORD_CHARS) return `at least ${MIN_PASSWORD_CHARS} characters`;
	if (password.length > MAX_PASSWORD_CHARS) return `at most ${MAX_PASSWORD_CHARS} characters`;
	const lower = password.toLowerCase();
	if (lower.includes(person.email.toLowerCase()) || lower === person.name.toLowerCase()) {
		return 'not your name or address';
	}
	if (new Set(lower).size < 5) return 'at least five different characters';
	return null;
}
