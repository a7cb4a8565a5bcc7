import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { stormSentence } from '$lib/format/notice-words';
import { sortSilent, type SilentNode, type Totals } from './storm';

const node = (nodeId: number, gateway: string, zone = 'N', sinceMs = 0): SilentNode => ({
	...{ nodeId, gateway, network: null, zone, sinceMs }
});
const range = (from: number, n: number, gateway: string, zone?: string) =>
	Array.from({ length: n }, (_, i) => node(from + i, gateway, zone));
const totals: Totals = {
	all: 500,
	gateway: new Map([
		['G1', 400],
		['G2', 100]
	]),
	network: new Map([
		['192.0.2.7', 60],
		['198.51.100.4', 60]
	]),
	zone: new Map([
		['N', 250],
		['S', 250]
	])
};
const NONE = new Set<string>();

describe('silent nodes are grouped by what they share (issue 6)', () => {
	test('84 of 500, all by G2, are one notice in the words of the issue', () => {
		const { storms, singles } = sortSilent(range(1, 84, 'G2'), totals, NONE);
		expect(singles).toEqual([]);
		expect(storms).toHaveLength(1);
		const [{ members, of, shared, label }] = storms as [(typeof storms)[number]];
		const facts = { count: members.length, of, shared, label };
		expect(stormSentence('08:12', facts)).toBe('Since 08:12, 84 of 500 nodes not heard, all by G2');
	});
	test('four nodes are told one by one', () => {
		expect(sortSilent(range(1, 4, 'G2'), totals, NONE).singles).toHaveLength(4);
	});
	test('few of many by one gateway are no storm of it', () => {
		expect(sortSilent(range(1, 8, 'G1'), totals, NONE).storms).toEqual([]);
	});
	test('nodes without a label that connected from one network address are one notice of it', () => {
		// Addresses of RFC 5737, for documentation.
		const behind = range(1, 40, '').map((one) => ({ ...one, gateway: null, network: '192.0.2.7' }));
		const { storms, singles } = sortSilent(behind, totals, NONE);
		expect(singles).toEqual([]);
		expect(storms.map(({ shared, label }) => [shared, label])).toEqual([['network', '192.0.2.7']]);
		const facts = { count: 40, of: 500, shared: 'network', label: '192.0.2.7' };
		expect(stormSentence('08:12', facts)).toBe(
			'Since 08:12, 40 of 500 nodes not heard, all behind 192.0.2.7'
		);
	});
	test('a stray node of another gateway stays single beside a storm', () => {
		const { storms, singles } = sortSilent([...range(1, 84, 'G2'), node(900, 'G1')], totals, NONE);
		expect(storms).toHaveLength(1);
		expect(singles.map(({ nodeId }) => nodeId)).toEqual([900]);
	});
	test('four of five nodes of a site are one notice of the site', () => {
		const { storms } = sortSilent([...range(1, 330, 'G1'), ...range(400, 90, 'G2')], totals, NONE);
		expect(storms.map(({ shared }) => shared)).toEqual(['site']);
	});
	test('one that is told goes on under its beginning, and ends when few are left', () => {
		const open = new Set(['gateway:G2']);
		expect(sortSilent(range(1, 40, 'G2'), totals, open).storms).toHaveLength(1);
		expect(sortSilent(range(1, 40, 'G2'), totals, NONE).storms).toHaveLength(0);
		expect(sortSilent(range(1, 20, 'G2'), totals, open).storms).toHaveLength(0);
	});
	test('every silent node is in exactly one storm or single', () => {
		const nodes = fc.uniqueArray(
			fc.record({
				nodeId: fc.integer({ min: 1, max: 500 }),
				gateway: fc.constantFrom('G1', 'G2', null),
				network: fc.constantFrom('192.0.2.7', null),
				zone: fc.constantFrom('N', 'S'),
				sinceMs: fc.nat()
			}),
			{ selector: ({ nodeId }) => nodeId, maxLength: 200 }
		);
		fc.assert(
			fc.property(nodes, fc.subarray(['site:', 'gateway:G2', 'zone:N']), (silent, open) => {
				const { storms, singles } = sortSilent(silent, totals, new Set(open));
				const all = [...storms.flatMap(({ members }) => members), ...singles];
				expect(all.map(({ nodeId }) => nodeId).sort()).toEqual(
					silent.map(({ nodeId }) => nodeId).sort()
				);
			})
		);
	});
});
