import type { InstrumentNow, SectionView } from '../../backend/backend';
import { declutter, type Placed, type Wish } from '../../shared/declutter';
import { rank } from '../trigger/words';
import type { Scale } from './scale';

/** Radius of a mark on the section, px. */
export const RADIUS_PX = 7;
/** Room for the bar of the band between mark and name, px. */
export const BAR_PX = 14;
/** Mean width of a character of a name at the usual text size, px. */
const CHARACTER_PX = 7.3;
/** How far a mark may move from its place, px. */
const FURTHEST_PX = 60;

/** Raised triggers come first, then faults, then what lies in the ground. The choice plays no part: marks do not jump. */
function weight(now: InstrumentNow): number {
  return 10 * rank(now.trigger) + (now.fault === null ? 0 : 5) + (now.depth_m > 0 ? 1 : 0);
}

/** Changes only when marks may have to be placed anew. */
export function sameness(instruments: readonly InstrumentNow[]): string {
  return instruments.map((now) => `${now.id} ${String(weight(now))}`).join(',');
}

/** Places marks and names of instruments on the section, clear of the names of the layers and the two
 * buttons; `textScale` is how much larger than usual the reader has text. */
export function placeMarks(
  instruments: readonly InstrumentNow[],
  section: SectionView,
  scale: Scale,
  width: number,
  height: number,
  textScale: number,
): Placed[] {
  const character = CHARACTER_PX * textScale;
  const wishes: Wish[] = instruments.map((now) => ({
    id: now.id,
    x: scale.x(now.section_x_m),
    y: scale.y(now.depth_m),
    radius: RADIUS_PX + 1,
    label: {
      width: (now.fault === null ? BAR_PX : 2) + now.id.length * character,
      height: 16 * textScale,
    },
    weight: weight(now),
  }));
  const names = section.layers.map((layer) => ({
    x: 8,
    y: Math.max(0, scale.y(layer.top_m)) + 2,
    width: layer.name.length * character,
    height: 14 * textScale,
  }));
  const buttons = { x: width - 110, y: height - 60, width: 110, height: 60 };
  return declutter(wishes, { x: 0, y: 0, width, height }, [...names, buttons], FURTHEST_PX);
}
