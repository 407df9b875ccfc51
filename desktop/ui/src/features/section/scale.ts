import type { InstrumentNow, SectionView } from '../../backend/backend';

/** From metres of the section to pixels, the same both ways: the drawing is to scale. */
export interface Scale {
  px_per_m: number;
  x: (x_m: number) => number;
  y: (depth_m: number) => number;
  /** What can be seen, m: left, right, top, bottom. */
  seen: { left: number; right: number; top: number; bottom: number };
}

/** Fits the section into a picture; where there is room to spare more ground is shown at the sides. */
export function fit(section: SectionView, width: number, height: number): Scale {
  const [left, right, top, bottom] = section.extent_m;
  const px_per_m = Math.min(width / (right - left), height / (bottom - top));
  const middle = (left + right) / 2;
  const half = width / 2 / px_per_m;
  const x = (x_m: number) => width / 2 + (x_m - middle) * px_per_m;
  const spare = (height - (bottom - top) * px_per_m) / 2;
  const y = (depth_m: number) => spare + (depth_m - top) * px_per_m;
  return {
    px_per_m,
    x,
    y,
    seen: {
      left: middle - half,
      right: middle + half,
      top: top - spare / px_per_m,
      bottom: bottom + spare / px_per_m,
    },
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
