// Places boxes near their points without overlap. Pixels only.

/** A rectangle, px. */
export interface Box {
  x: number;
  y: number;
  width: number;
  height: number;
}

/** What wants a place: the box of its mark and label, with the mark's centre as the origin. */
export interface Wish {
  id: string;
  /** Where it belongs. */
  x: number;
  y: number;
  /** Half the mark. */
  radius: number;
  /** Size of the text beside the mark, nought for none. */
  label: { width: number; height: number };
  /** Higher ones are placed first. */
  weight: number;
}

/** Where something came to stand. */
export interface Placed {
  id: string;
  /** Centre of the mark. */
  x: number;
  y: number;
  /** Where it belongs, to draw a leader when it had to move. */
  homeX: number;
  homeY: number;
  moved: boolean;
  /** Left end of the label and its middle, or null where there was no room for it. */
  label: { x: number; y: number; width: number; left: boolean } | null;
}

const GAP = 3;

export function overlap(a: Box, b: Box, gap = 0): boolean {
  return (
    a.x < b.x + b.width + gap &&
    b.x < a.x + a.width + gap &&
    a.y < b.y + b.height + gap &&
    b.y < a.y + a.height + gap
  );
}

function inside(box: Box, frame: Box): boolean {
  return (
    box.x >= frame.x &&
    box.y >= frame.y &&
    box.x + box.width <= frame.x + frame.width &&
    box.y + box.height <= frame.y + frame.height
  );
}

const markBox = (x: number, y: number, radius: number): Box => ({
  x: x - radius,
  y: y - radius,
  width: 2 * radius,
  height: 2 * radius,
});

/** Places at home, then on growing rings about it. */
function* places(wish: Wish, reach: number): Generator<[number, number]> {
  yield [wish.x, wish.y];
  const step = wish.radius;
  for (let ring = step; ring <= reach; ring += step) {
    const count = Math.max(8, Math.round((2 * Math.PI * ring) / step));
    for (let turn = 0; turn < count; turn += 1) {
      const angle = (2 * Math.PI * turn) / count;
      yield [wish.x + ring * Math.cos(angle), wish.y + ring * Math.sin(angle)];
    }
  }
}

function labelBoxes(wish: Wish, x: number, y: number): { box: Box; left: boolean }[] {
  const { width, height } = wish.label;
  const top = y - height / 2;
  return [
    { box: { x: x + wish.radius + GAP, y: top, width, height }, left: false },
    { box: { x: x - wish.radius - GAP - width, y: top, width, height }, left: true },
  ];
}

/**
 * Marks first come to their own place, heavy ones before light ones; one whose place is taken moves
 * to the nearest free place within `reach`. A label that finds no free side is left out: its mark
 * still answers to pointer and keyboard. A mark without any free place stays at home.
 */
export function declutter(
  wishes: readonly Wish[],
  frame: Box,
  taken: readonly Box[],
  reach: number,
): Placed[] {
  const boxes: Box[] = [...taken];
  const free = (box: Box) => inside(box, frame) && boxes.every((other) => !overlap(box, other, 1));
  const order = [...wishes].sort((a, b) => b.weight - a.weight);
  const placed = order.map((wish) => {
    const withLabel = wish.label.width > 0 ? place(wish, true) : null;
    return withLabel ?? place(wish, false) ?? at(wish, wish.x, wish.y, null);
  });
  return placed;

  function place(wish: Wish, label: boolean): Placed | null {
    for (const [x, y] of places(wish, label ? Math.min(reach, wish.radius * 3) : reach)) {
      if (!free(markBox(x, y, wish.radius))) continue;
      if (!label) return at(wish, x, y, null);
      const side = labelBoxes(wish, x, y).find(({ box }) => free(box));
      if (side) return at(wish, x, y, side);
    }
    return null;
  }

  function at(wish: Wish, x: number, y: number, side: { box: Box; left: boolean } | null): Placed {
    boxes.push(markBox(x, y, wish.radius));
    if (side) boxes.push(side.box);
    return {
      id: wish.id,
      x,
      y,
      homeX: wish.x,
      homeY: wish.y,
      moved: Math.hypot(x - wish.x, y - wish.y) > 1,
      label: side && { x: side.box.x, y, width: side.box.width, left: side.left },
    };
  }
}
