import { expect, test } from 'vitest';
import { declutter, overlap, type Box, type Placed, type Wish } from './declutter';

const FRAME: Box = { x: 0, y: 0, width: 760, height: 330 };
const wish = (id: string, x: number, y: number, weight = 0): Wish => ({
  id,
  x,
  y,
  radius: 8,
  label: { width: 36, height: 15 },
  weight,
});

function boxes(placed: readonly Placed[]): Box[] {
  return placed.flatMap(({ x, y, label }) => [
    { x: x - 8, y: y - 8, width: 16, height: 16 },
    ...(label ? [{ x: label.x, y: label.y - 7.5, width: label.width, height: 15 }] : []),
  ]);
}

function collisions(all: readonly Box[]): number {
  return all.flatMap((a, at) => all.slice(at + 1).filter((b) => overlap(a, b))).length;
}

test('an instrument with room stays at home with its name at the right', () => {
  expect(declutter([wish('PC1', 300, 200)], FRAME, [], 60)).toEqual([
    {
      id: 'PC1',
      x: 300,
      y: 200,
      homeX: 300,
      homeY: 200,
      moved: false,
      label: { x: 311, y: 200, width: 36, left: false },
    },
  ]);
});

test('at the right edge the name stands at the left', () => {
  const [placed] = declutter([wish('PO1', 750, 200)], FRAME, [], 60);
  expect(placed?.label?.left).toBe(true);
});

test('a dense edge of a tank comes out without marks or names over each other', () => {
  const crowd = Array.from({ length: 24 }, (_, at) =>
    wish(`P${String(at)}`, 400 + (at % 5) * 6, 160 + Math.floor(at / 5) * 10),
  );
  const placed = declutter(crowd, FRAME, [], 140);
  expect(placed).toHaveLength(24);
  expect(collisions(boxes(placed))).toBe(0);
  for (const { x, y, homeX, homeY, moved } of placed) {
    expect(moved).toBe(Math.hypot(x - homeX, y - homeY) > 1);
    expect(Math.hypot(x - homeX, y - homeY)).toBeLessThanOrEqual(140);
  }
});

test('the heavier of two at one place keeps the place', () => {
  const placed = declutter(
    [wish('light', 300, 200, 0), wish('heavy', 300, 200, 30)],
    FRAME,
    [],
    60,
  );
  expect(placed.map(({ id, moved }) => [id, moved])).toEqual([
    ['heavy', false],
    ['light', true],
  ]);
});

test('what is taken stays free', () => {
  const taken: Box = { x: 290, y: 190, width: 120, height: 20 };
  const placed = declutter([wish('PC1', 300, 200)], FRAME, [taken], 60);
  expect(boxes(placed).some((box) => overlap(box, taken))).toBe(false);
});
