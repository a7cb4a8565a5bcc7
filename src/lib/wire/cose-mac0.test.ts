import { describe, expect, test } from 'vitest';
import { macInput, openMac0, readMac0 } from './cose-mac0';
import { openEnvelope } from './envelope';
import { hex, toHex } from './test-support';

// Source: cose-wg/Examples @53c9d63, hmac-examples and mac0-tests (check-values.md 9f).
const K32 = '849B57219DAE48DE646D07DBB533566E976686457C1491BE3A76DCEA6C427188';
const K48 = `${K32}00112233778899AA2122232425262728`;
const K64 = `${K48}AABBCCDDEEFFA5A6A7A8A9A0B1B2B3B4`;
const CONTENT = '546869732069732074686520636F6E74656E742E';
const AAD = 'FF00EE11DD22CC33BB44AA559966';
const P = `A054${CONTENT}`;
const HS256 = '5820A1A848D3471F9D61EE49018D244C824772F223AD4F935293F1789FC3A08D8C58';
const PASS_01 = '5820176DCE14C1E57430C13658233F41DC89AA4FA0FF9B8783F23B0EF51CA6B026BC';

const PASS = [
	['HMac-enc-01', K32, '', `D18443A10105${P}${HS256}`],
	[
		'HMac-enc-02',
		K48,
		'',
		`D18443A10106${P}5830998D26C6459AAEECF44ED20CE00C8CCEDF0A1F3D22A92FC05DB08C5AEB1CB594CAAF5A5C5E2E9D01CCE7E77A93AA8C62`
	],
	[
		'HMac-enc-03',
		K64,
		'',
		`D18443A10107${P}58404A555BF971F7C1891D9DDF304A1A132E2D6F817449474D813E6D04D65962BED8BBA70C17E1F5308FA39962959A4B9B8D7DA8E6D849B209DCD3E98CC0F11EDDF2`
	],
	['HMac-enc-05', K32, '', `D18443A10104${P}4811F9E357975FB849`],
	['mac-pass-01', K32, '', `D18441A0A1010554${CONTENT}${PASS_01}`],
	[
		'mac-pass-02',
		K32,
		AAD,
		`D18440A1010554${CONTENT}58200FECAEC59BB46CC8A488AACA4B205E322DD52696B75A45768D3C302DD4BAE2F7`
	],
	['mac-pass-03', K32, '', `8440A1010554${CONTENT}${PASS_01}`]
] as const;

const FAIL = [
	['HMac-enc-04 and mac-fail-02', `D18443A10105${P}${HS256.slice(0, -2)}59`],
	['mac-fail-01', `D903E08443A10105${P}${HS256}`],
	['mac-fail-03', `D18445A1013903E6${P}${HS256}`],
	['mac-fail-04', `D1844AA10167556E6B6E6F776E${P}${HS256}`],
	['mac-fail-06', `D18445A201050300${P}${HS256}`],
	[
		'mac-fail-07',
		`D18443A10105${P}5820BB9E11EF2BD673F766A398D4E3FAD78E0F0BE2806BF73FB647471E40B3D98734`
	]
] as const;

describe('the general COSE_Mac0 routine', () => {
	test.each(PASS)('%s verifies', (_name, key, aad, message) => {
		const payload = openMac0(hex(message), hex(key), hex(aad));
		expect(payload === null ? null : toHex(payload).toUpperCase()).toBe(CONTENT);
	});

	test.each(FAIL)('%s fails', (_name, message) => {
		expect(openMac0(hex(message), hex(K32), hex(''))).toBeNull();
	});

	test.each([
		[PASS[0][3], '', '84644D41433043A101054054546869732069732074686520636F6E74656E742E'],
		[PASS[4][3], '', '84644D414330404054546869732069732074686520636F6E74656E742E'],
		[
			PASS[5][3],
			AAD,
			'84644D414330404EFF00EE11DD22CC33BB44AA55996654546869732069732074686520636F6E74656E742E'
		]
	])('the bytes under the MAC of %s are the published ones', (message, aad, toMac) => {
		const { protectedBytes, payload } = readMac0(hex(message));
		const input = macInput(protectedBytes, hex(aad), payload);
		expect(toHex(input).toUpperCase()).toBe(toMac);
	});

	test('another aad does not verify', () => {
		expect(openMac0(hex(PASS[5][3]), hex(K32), hex(''))).toBeNull();
	});
});

describe('the opener of frames', () => {
	test.each([PASS[1], PASS[2], PASS[4], PASS[5], PASS[6]])(
		'%s verifies in COSE, and its header is refused here',
		(_name, key, _aad, message) => {
			expect(openEnvelope('', hex(message), [hex(key)])).toMatchObject({
				ok: false,
				reason: 'not_decodable'
			});
		}
	);

	test.each([PASS[0], PASS[3]])('%s is taken', (_name, key, _aad, message) => {
		expect(openEnvelope('', hex(message), [hex(key)]).ok).toBe(true);
	});

	test.each(FAIL)('%s is refused', (_name, message) => {
		expect(openEnvelope('', hex(message), [hex(K32)]).ok).toBe(false);
	});

	test('tag 17 may be there or not', () => {
		expect(openEnvelope('', hex(PASS[0][3].slice(2)), [hex(K32)]).ok).toBe(true);
	});

	test('a tag of HMAC 256/256 cut to 8 bytes is no tag of algorithm 5', () => {
		const cut = `8443A10105${P}48${HS256.slice(4, 20)}`;
		expect(openEnvelope('', hex(cut), [hex(K32)])).toMatchObject({ ok: false, reason: 'bad_tag' });
	});
});
