import type { InstrumentNow, SectionView } from '../../backend/backend';

/** From metres of the section to pixels, the same both ways: the drawing is to scale. */
export interface Scale {
  px_per_m: number;
  x: (x_m: number) => number;
  y: (depth_m: number) => number;
  /** What can be seen, m: left, right, top, bottom. */
  seen: { left: number; right: number; top: number; bottom: number };
}

/** How much larger than the whole section the drawing is, step by step. */
export const ZOOMS = [1, 1.6, 2.5, 4] as const;

/** What is looked at: how large, and about which point of the section, m. */
export interface Look {
  zoom: number;
  x_m: number;
  depth_m: number;
}

/** Nearest place for the middle of a window of `seen` so that it stays within `from` to `to`. */
function within(middle: number, seen: number, from: number, to: number): number {
  if (seen >= to - from) return (from + to) / 2;
  return Math.max(from + seen / 2, Math.min(to - seen / 2, middle));
}

/**
 * Fits the section into a picture; where there is room to spare more ground is shown at the sides.
 * Enlarged, the picture shows the part about the point that is looked at.
 */
export function fit(
  section: SectionView,
  width: number,
  height: number,
  look: Look = { zoom: 1, x_m: 0, depth_m: 0 },
): Scale {
  const [left, right, top, bottom] = section.extent_m;
  const px_per_m = look.zoom * Math.min(width / (right - left), height / (bottom - top));
  const [wide_m, high_m] = [width / px_per_m, height / px_per_m];
  const x_m = within(look.x_m, wide_m, left, right) - wide_m / 2;
  const depth_m = within(look.depth_m, high_m, top, bottom) - high_m / 2;
  return {
    px_per_m,
    x: (at_m) => (at_m - x_m) * px_per_m,
    y: (at_m) => (at_m - depth_m) * px_per_m,
    seen: { left: x_m, right: x_m + wide_m, top: depth_m, bottom: depth_m + high_m },
  };
}

/** Drawn on the section when nearer to its plane than a fifth of the tank; the others on the plan. */
export function onSection(now: InstrumentNow, section: SectionView): boolean {
  const tank = section.tanks.find((one) => one.under_test);
  return Math.abs(now.off_section_m) <= (tank?.diameter_m ?? Infinity) / 5;
}

/** Where a step of the arrow keys leads: the nearest point that way, a little sideways allowed. */
export function neighbour(
  points: readonly { id: string; x: number; y: number }[],
  from: string,
  key: string,
): string | null {
  const here = points.find((point) => point.id === from);
  const way = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[key];
  if (!here || !way) return null;
  const [wayX = 0, wayY = 0] = way;
  let best: { id: string; cost: number } | null = null;
  for (const point of points) {
    const along = (point.x - here.x) * wayX + (point.y - here.y) * wayY;
    const aside = Math.abs((point.x - here.x) * wayY) + Math.abs((point.y - here.y) * wayX);
    if (point.id === from || along < 1) continue;
    const cost = along + 2 * aside;
    if (!best || cost < best.cost) best = { id: point.id, cost };
  }
  return best?.id ?? null;
}
