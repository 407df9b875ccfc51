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

/** Acts on the newest value once it has not changed for `quietMs`. */
export class WhenQuiet<T> {
  #timer: ReturnType<typeof setTimeout> | undefined;
  #quietMs: number;
  #act: (value: T) => void;

  constructor(quietMs: number, act: (value: T) => void) {
    this.#quietMs = quietMs;
    this.#act = act;
  }

  set(value: T): void {
    this.drop();
    this.#timer = setTimeout(() => {
      this.#act(value);
    }, this.#quietMs);
  }

  /** Forgets the value that waits. */
  drop(): void {
    clearTimeout(this.#timer);
  }
}
