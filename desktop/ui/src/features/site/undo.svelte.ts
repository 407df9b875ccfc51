/** Steps of a text, so that typing can be taken back; quick typing is one step. */
export class Undo {
  #before: string[] = [];
  #after: string[] = [];
  #lastMs = 0;
  now = $state('');
  depth = $state(0);
  ahead = $state(0);

  constructor(text: string) {
    this.now = text;
  }

  /** A new text; within half a second of the last it belongs to the same step. */
  write(text: string, timeMs: number): void {
    if (text === this.now) return;
    if (timeMs - this.#lastMs > 500 || this.#before.length === 0) this.#before.push(this.now);
    this.#lastMs = timeMs;
    this.#after = [];
    this.now = text;
    this.#count();
  }

  back(): void {
    this.#turn(this.#before, this.#after);
  }

  forward(): void {
    this.#turn(this.#after, this.#before);
  }

  #turn(from: string[], to: string[]): void {
    const text = from.pop();
    if (text === undefined) return;
    to.push(this.now);
    this.now = text;
    this.#lastMs = 0;
    this.#count();
  }

  #count(): void {
    this.depth = this.#before.length;
    this.ahead = this.#after.length;
  }
}
