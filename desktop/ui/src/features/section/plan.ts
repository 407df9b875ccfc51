import type { InstrumentNow, SectionView } from '../../backend/backend';
import { declutter, type Box } from '../../shared/declutter';
import { onSection, type Scale } from './scale';

/** Where an instrument stands on the small plan, px. */
export interface PlanPoint {
  id: string;
  x: number;
  y: number;
}

/** Smallest plan on which marks can be told apart, px. */
const SMALLEST = 84;
const MARGIN = 22;
/** Radius of a mark on the plan, px. */
export const PLAN_MARK_PX = 5.5;

/** The free piece of sky beside the tank under test where the plan goes; null when there is none. */
export function planFrame(section: SectionView, scale: Scale, width: number): Box | null {
  const tank = section.tanks.find((one) => one.under_test);
  if (!tank) return null;
  const edges = section.tanks
    .filter((one) => !one.under_test)
    .flatMap((one) => [one.x_m - one.diameter_m / 2, one.x_m + one.diameter_m / 2])
    .map(scale.x);
  const left = scale.x(tank.x_m - tank.diameter_m / 2);
  const right = scale.x(tank.x_m + tank.diameter_m / 2);
  const from = Math.max(0, ...edges.filter((edge) => edge <= left));
  const to = Math.min(width, ...edges.filter((edge) => edge >= right));
  const top = Math.max(0, scale.y(scale.seen.top));
  const height = scale.y(0) - top - 8;
  const sides = [
    { x: from, width: left - from },
    // The level is written at the right of the tank.
    { x: right + 60, width: to - right - 60 },
  ].sort((a, b) => b.width - a.width);
  const side = sides[0];
  if (!side || Math.min(side.width, height) < SMALLEST) return null;
  return { x: side.x, y: top, width: side.width, height };
}

/** Radius of the tank on the plan, px. */
export function planRadius(frame: Box): number {
  return Math.min(frame.width, frame.height) / 2 - MARGIN;
}

/** Instruments off the section; those far outside stand at the rim of the plan, on their bearing. */
export function planPoints(
  instruments: readonly InstrumentNow[],
  section: SectionView,
  frame: Box,
): PlanPoint[] {
  const tank = section.tanks.find((one) => one.under_test);
  if (!tank) return [];
  const px_per_m = planRadius(frame) / (tank.diameter_m / 2);
  const rim = Math.min(frame.width, frame.height) / 2 - 7;
  const middle = { x: frame.x + frame.width / 2, y: frame.y + frame.height / 2 };
  const wishes = instruments
    .filter((now) => !onSection(now, section))
    .map((now) => {
      const east = (now.section_x_m - tank.x_m) * px_per_m;
      const north = now.off_section_m * px_per_m;
      const far = Math.hypot(east, north);
      const shrink = far > rim ? rim / far : 1;
      return {
        id: now.id,
        x: middle.x + east * shrink,
        y: middle.y - north * shrink,
        radius: PLAN_MARK_PX + 0.5,
        label: { width: 0, height: 0 },
        weight: 0,
      };
    });
  return declutter(wishes, frame, [], 30);
}
