import { expect, test } from 'vitest';
import { z } from 'zod';
import { invalidBody, invalidQuery, problem } from './problem';

test('without a type of its own the title is the HTTP phrase (RFC 9457, 4.2.1; check-values 9e)', () => {
	expect(problem(404, 'Nothing here.').body).toEqual({
		type: 'about:blank',
		title: 'Not Found',
		status: 404,
		detail: 'Nothing here.'
	});
});

test('errors point into the body as RFC 6901 fragments', () => {
	const shape = z.strictObject({ list: z.array(z.strictObject({ 'a/b~c': z.number() })) });
	const checked = shape.safeParse({ list: [{ 'a/b~c': 'x' }], more: 1 });
	const { errors } = invalidBody(checked.error!).body;
	expect(errors?.map((e) => e.pointer)).toEqual(['#/list/0/a~1b~0c', '#/more']);
});

test('of a union the branch that got furthest is told', () => {
	const shape = z.union([
		z.array(z.strictObject({ n: z.number() })),
		z.strictObject({ of: z.string() })
	]);
	const { errors } = invalidBody(shape.safeParse([{ n: 'x' }]).error!).body;
	expect(errors?.map((e) => e.pointer)).toEqual(['#/0/n']);
});

test('a bad query parameter is named', () => {
	const shape = z.strictObject({ limit: z.coerce.number().max(1000, 'must be at most 1000') });
	expect(invalidQuery(shape.safeParse({ limit: '2000' }).error!).body.detail).toBe(
		'Query: limit: must be at most 1000.'
	);
	expect(invalidQuery(shape.safeParse({ limit: '1', nonsense: '1' }).error!).body.detail).toBe(
		'Query: nonsense: is not known here.'
	);
});
