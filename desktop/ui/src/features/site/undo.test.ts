import { expect, test } from 'vitest';
import { Undo } from './undo.svelte';

test('quick typing is one step, a pause starts another', () => {
  const undo = new Undo('a');
  undo.write('ab', 1000);
  undo.write('abc', 1100);
  undo.write('abcd', 3000);
  undo.back();
  expect(undo.now).toBe('abc');
  undo.back();
  expect(undo.now).toBe('a');
  undo.back();
  expect(undo.now).toBe('a');
  undo.forward();
  undo.forward();
  expect(undo.now).toBe('abcd');
});

test('writing after undo forgets what lay ahead', () => {
  const undo = new Undo('a');
  undo.write('b', 0);
  undo.back();
  undo.write('c', 2000);
  undo.forward();
  expect(undo.now).toBe('c');
  expect(undo.ahead).toBe(0);
});
