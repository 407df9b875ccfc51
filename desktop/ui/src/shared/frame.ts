/** Calls `draw` with the newest value, once in a frame at most. */
export function everyFrame<T>(draw: (value: T) => void): (value: T) => void {
  let waiting: { value: T } | null = null;
  return (value) => {
    const idle = waiting === null;
    waiting = { value };
    if (!idle) return;
    requestAnimationFrame(() => {
      const next = waiting;
      waiting = null;
      if (next) draw(next.value);
    });
  };
}

/** Calls `act` with the newest value once it has not changed for `quietMs`. */
export function whenQuiet<T>(quietMs: number, act: (value: T) => void): (value: T) => void {
  let timer: ReturnType<typeof setTimeout> | undefined;
  return (value) => {
    clearTimeout(timer);
    timer = setTimeout(() => {
      act(value);
    }, quietMs);
  };
}
