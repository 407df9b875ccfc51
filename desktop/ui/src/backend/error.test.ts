import { expect, test } from 'vitest';
import { BackendError } from './error';

test('a failure of the shell keeps its code and its words', () => {
  const error = BackendError.from({ code: 'store-locked', message: 'Another program writes.' });
  expect([error.code, error.message]).toEqual(['store-locked', 'Another program writes.']);
});

test('whatever else is thrown becomes one that says what to do', () => {
  const error = BackendError.from(new TypeError('x is undefined'));
  expect(error.code).toBe('unexpected');
  expect(error.message).toContain('x is undefined');
  expect(error.message).toContain('Try again');
});
