import { fireEvent, render, screen } from '@testing-library/svelte';
import { expect, test, vi } from 'vitest';
import type { ChartView, Opened } from '../../backend/backend';
import { backendWith } from '../../test/fixtures';
import { instantAt, nearest, pixelAt } from '../chart/pointer';
import FillLine from './FillLine.svelte';
import { change, step } from './steps';

const HOUR_MS = 3_600_000;

async function draw(cursorOffsetMs = 0) {
  const backend = await backendWith();
  const opened: Opened = await backend.openDemo(null);
  const chart: ChartView = await backend.fillLine(
    { width: 764, height: 220, theme: 'light' },
    'si',
  );
  const cursorMs = opened.last_ms + cursorOffsetMs;
  const moveTo = vi.fn<(timeMs: number) => void>();
  render(FillLine, { chart, opened, cursorMs, cursorText: '23 May 2026, 09:00 UTC+3', moveTo });
  return { opened, chart, cursorMs, moveTo, slider: screen.getByRole('slider') };
}

test('arrows move by an hour, with Shift by a day', async () => {
  const { slider, cursorMs, moveTo } = await draw();
  await fireEvent.keyDown(slider, { key: 'ArrowLeft' });
  await fireEvent.keyDown(slider, { key: 'ArrowRight', shiftKey: true });
  expect(moveTo.mock.calls).toEqual([[cursorMs - HOUR_MS], [cursorMs + 24 * HOUR_MS]]);
});

test('Page Down, Home and End lead to the change before, the first moment and the last reading', async () => {
  const { slider, opened, chart, moveTo } = await draw(-HOUR_MS);
  const before = chart.events
    .map(({ time_ms }) => time_ms)
    .filter((time) => time < opened.last_ms - HOUR_MS);
  for (const key of ['PageDown', 'Home', 'End']) await fireEvent.keyDown(slider, { key });
  expect(moveTo.mock.calls).toEqual([[Math.max(...before)], [opened.from_ms], [opened.last_ms]]);
});

test('the wheel jumps to a change of a trigger', async () => {
  const { slider, chart, moveTo } = await draw();
  const overlay = slider.closest('svg');
  if (!overlay) throw new Error('the slider stands in the overlay');
  await fireEvent.wheel(overlay, { deltaY: -30 });
  expect(moveTo).not.toHaveBeenCalled();
  await fireEvent.wheel(overlay, { deltaY: -70 });
  expect(moveTo).toHaveBeenCalledExactlyOnceWith(
    Math.max(...chart.events.map(({ time_ms }) => time_ms)),
  );
});

test('the slider says the moment in words', async () => {
  const { slider, opened } = await draw();
  expect(slider.getAttribute('aria-valuetext')).toBe('23 May 2026, 09:00 UTC+3');
  expect(slider.getAttribute('aria-valuenow')).toBe(String(opened.last_ms));
});

test('other keys stay with the page', () => {
  expect(step('Tab', false)).toBeNull();
  expect(change([], 0, 'later')).toBeNull();
});

test('from an instant to its pixel and back', () => {
  const axis = [44, 706, 1_772_431_200, 1_780_261_200] as const;
  const timeMs = 1_776_000_000_000;
  expect(instantAt([...axis], pixelAt([...axis], timeMs))).toBeCloseTo(timeMs, 0);
  expect(pixelAt([...axis], 1_772_431_200_000)).toBe(44);
});

test('the pointer means the nearest point within reach', () => {
  const points = [
    { px: [10, 10] as [number, number], text: 'a', time_ms: 1 },
    { px: [20, 10] as [number, number], text: 'b', time_ms: 2 },
  ];
  expect(nearest(points, [18, 12], 14)?.text).toBe('b');
  expect(nearest(points, [80, 80], 14)).toBeNull();
});
