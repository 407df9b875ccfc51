import type { HoverPoint } from '../../backend/backend';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;

/** A step of the cursor by a key; null when the key means something else. */
export function step(key: string, shift: boolean): number | null {
  const by = shift ? DAY_MS : HOUR_MS;
  switch (key) {
    case 'ArrowLeft':
    case 'ArrowDown':
      return -by;
    case 'ArrowRight':
    case 'ArrowUp':
      return by;
    default:
      return null;
  }
}

/** The change of a trigger before or after the cursor. */
export function change(
  events: readonly HoverPoint[],
  cursorMs: number,
  way: 'earlier' | 'later',
): HoverPoint | null {
  const times = [...events].sort((a, b) => a.time_ms - b.time_ms);
  return (
    (way === 'earlier'
      ? times.findLast((event) => event.time_ms < cursorMs)
      : times.find((event) => event.time_ms > cursorMs)) ?? null
  );
}
