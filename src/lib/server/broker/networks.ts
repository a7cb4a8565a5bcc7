/**
 * From where nodes connect: the address that a router or gateway gives them, so that those behind one that
 * fails are told together. In memory: what was known before a restart stands in the app's database.
 */
export class Networks {
	readonly #of = new Map<string, string>();
	#untold = new Set<string>();

	/** A node has signed in from there; loopback says nothing and is not kept. */
	note(serial: string, remoteAddress: string | undefined): void {
		const network = networkOf(remoteAddress);
		if (network === null || this.#of.get(serial) === network) return;
		this.#of.set(serial, network);
		this.#untold.add(serial);
	}

	/** A new session of the app is told everything again. */
	tellAll(): void {
		this.#untold = new Set(this.#of.keys());
	}

	/** At most `most` pairs of serial and network that were not told yet. */
	take(most: number): [string, string][] {
		const told: [string, string][] = [];
		for (const serial of this.#untold) {
			if (told.length >= most) break;
			this.#untold.delete(serial);
			const network = this.#of.get(serial);
			if (network !== undefined) told.push([serial, network]);
		}
		return told;
	}
}

/** IPv6 hosts of one link share their first 64 bits (RFC 4291, 2.5.1 and 2.5.4). */
const PREFIX_GROUPS = 4;

/** 'IPv4 address' or 'first 64 bits::/64' of an IPv6 one; null = loopback or not known. */
export function networkOf(remoteAddress: string | undefined): string | null {
	const plain = (remoteAddress ?? '').replace(/^::ffff:(?=\d+\.)/i, '').replace(/%.*$/, '');
	if (plain === '' || plain === '::1' || plain.startsWith('127.')) return null;
	if (!plain.includes(':')) return plain;
	const [head = '', tail = ''] = plain.toLowerCase().split('::');
	const [left, right] = [head, tail].map((part) => (part === '' ? [] : part.split(':')));
	const missing = 8 - (left?.length ?? 0) - (right?.length ?? 0);
	const groups = [
		...(left ?? []),
		...Array<string>(Math.max(0, missing)).fill('0'),
		...(right ?? [])
	];
	return `${groups.slice(0, PREFIX_GROUPS).join(':')}::/64`;
}
