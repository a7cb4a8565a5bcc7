import { expect, test } from 'vitest';
import { checkPassword, hashPassword, passwordProblem } from './password';

test('a password is kept as argon2id and checked against it', async () => {
	const stored = await hashPassword('nine quiet bays');
	expect(stored).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
	expect(await checkPassword(stored, 'nine quiet bays')).toBe(true);
	expect(await checkPassword(stored, 'nine quiet bay')).toBe(false);
});

test('nobody is never right', async () => {
	expect(await checkPassword(null, 'a decoy that nobody types')).toBe(false);
});

const person = { email: 'ona@lodekeep.example', name: 'Ona Perro Longname' };
test.each([
	['short', /12 characters/],
	['x'.repeat(201), /at most 200/],
	['aaaaaaaaaaaaaaa', /different/],
	['Ona Perro Longname', /not your name/],
	['xx ona@lodekeep.example', /not your name/],
	['four odd green gates', null]
])('%s', (password, why) => {
	const said = passwordProblem(password, person);
	if (why === null) expect(said).toBeNull();
	else expect(said).toMatch(why);
});
