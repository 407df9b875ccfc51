import { afterEach, beforeEach, expect, test, vi } from 'vitest';
import { Asked, askAtRest } from './asked.svelte';

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

function follow() {
  const told: string[] = [];
  const asked = new Asked<{ timeMs: number; id: string }, string>(({ id, timeMs }) => {
    told.push(`${id} at ${String(timeMs)}`);
    return Promise.resolve(id);
  });
  return { told, asked, ask: askAtRest(asked, 100) };
}

test('while only the moment moves, one question is asked when it rests', async () => {
  const { told, ask } = follow();
  ask({ id: 'PE1', timeMs: 0 }, 1);
  for (const timeMs of [1, 2, 3]) ask({ id: 'PE1', timeMs }, 1);
  expect(told).toEqual(['PE1 at 0']);
  await vi.advanceTimersByTimeAsync(100);
  expect(told).toEqual(['PE1 at 0', 'PE1 at 3']);
});

test('another instrument is asked for at once, and what waited for the old one is forgotten', async () => {
  const { told, asked, ask } = follow();
  ask({ id: 'PE1', timeMs: 0 }, 1);
  await vi.advanceTimersByTimeAsync(0);
  ask({ id: 'PE1', timeMs: 5 }, 1);
  ask({ id: 'SC3', timeMs: 5 }, 1);
  await vi.advanceTimersByTimeAsync(500);
  expect(told).toEqual(['PE1 at 0', 'SC3 at 5']);
  expect(asked.value).toBe('SC3');
});

test('new content is asked for at once at the same moment', async () => {
  const { told, ask } = follow();
  ask({ id: 'PE1', timeMs: 0 }, 1);
  await vi.advanceTimersByTimeAsync(0);
  ask({ id: 'PE1', timeMs: 0 }, 2);
  expect(told).toHaveLength(2);
});
