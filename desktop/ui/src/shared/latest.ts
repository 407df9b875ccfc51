/**
 * Runs at most one request at a time and only the newest of those that wait: whatever came between
 * is left out. This keeps a drag fluent however long an answer takes.
 */
export class Latest<Q, A> {
  #ask: (question: Q) => Promise<A>;
  #tell: (answer: A, question: Q) => void;
  #fail: (error: unknown, question: Q) => void;
  #waiting: { question: Q } | null = null;
  #running = false;

  constructor(
    ask: (question: Q) => Promise<A>,
    tell: (answer: A, question: Q) => void,
    fail: (error: unknown, question: Q) => void,
  ) {
    this.#ask = ask;
    this.#tell = tell;
    this.#fail = fail;
  }

  /** Asks, or waits for the answer under way; a newer question takes the place of this one. */
  request(question: Q): void {
    this.#waiting = { question };
    if (!this.#running) void this.#run();
  }

  async #run(): Promise<void> {
    this.#running = true;
    while (this.#waiting) {
      const { question } = this.#waiting;
      this.#waiting = null;
      try {
        this.#tell(await this.#ask(question), question);
      } catch (error) {
        this.#fail(error, question);
      }
    }
    this.#running = false;
  }
}
