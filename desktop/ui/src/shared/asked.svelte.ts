import { Latest } from './latest';

/**
 * An answer that is fetched: waiting, there, or failed. While a newer one is under way the older
 * one stays to be seen. It is the newest question that counts.
 */
export class Asked<Q, A> {
  value = $state.raw<A | null>(null);
  error = $state.raw<unknown>(null);
  /** The question that `value` answers. */
  answered = $state.raw<Q | null>(null);
  #latest: Latest<Q, A>;
  /** The newest question. */
  question: Q | null = null;

  constructor(ask: (question: Q) => Promise<A>) {
    this.#latest = new Latest(
      ask,
      (answer, question) => {
        this.value = answer;
        this.answered = question;
        this.error = null;
      },
      (error) => {
        this.error = error;
      },
    );
  }

  ask(question: Q): void {
    this.question = question;
    this.#latest.request(question);
  }

  again(): void {
    if (this.question !== null) this.ask(this.question);
  }

  /** Takes an answer that came another way, such as with what was just written. */
  take(answer: A): void {
    this.value = answer;
    this.error = null;
  }

  /** Forgets the answer, so that nothing of another site stays on the page. */
  forget(): void {
    this.value = null;
    this.answered = null;
    this.error = null;
  }
}
