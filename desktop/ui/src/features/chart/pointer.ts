import type { HoverPoint } from '../../backend/backend';

/** Where a pointer is on a picture, in the picture's own px; null where the page cannot tell. */
export function onPicture(overlay: SVGSVGElement, event: MouseEvent): [number, number] | null {
  const toScreen = overlay.getScreenCTM();
  if (!toScreen) return null;
  const at = new DOMPoint(event.clientX, event.clientY).matrixTransform(toScreen.inverse());
  return [at.x, at.y];
}

/** The point next to the pointer, none when it is further away than `reach` px. */
export function nearest(
  points: readonly HoverPoint[],
  [x, y]: readonly [number, number],
  reach: number,
): HoverPoint | null {
  let best: HoverPoint | null = null;
  let least = reach;
  for (const point of points) {
    const away = Math.hypot(point.px[0] - x, point.px[1] - y);
    if (away <= least) {
      least = away;
      best = point;
    }
  }
  return best;
}

/** Size that a picture says of itself. */
export function ownSize(svg: string): [number, number] {
  const width = /<svg[^>]*\swidth="([\d.]+)"/.exec(svg)?.[1];
  const height = /<svg[^>]*\sheight="([\d.]+)"/.exec(svg)?.[1];
  return [Number(width ?? 400), Number(height ?? 200)];
}

/** Pixel of an instant on the time axis of a chart, whose values are seconds. */
export function pixelAt(axis: readonly [number, number, number, number], timeMs: number): number {
  const [px0, px1, from, to] = axis;
  return px0 + ((timeMs / 1000 - from) / (to - from)) * (px1 - px0);
}

/** Instant of a pixel on the time axis of a chart. */
export function instantAt(axis: readonly [number, number, number, number], px: number): number {
  const [px0, px1, from, to] = axis;
  return (from + ((px - px0) / (px1 - px0)) * (to - from)) * 1000;
}
